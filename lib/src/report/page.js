(function() {
'use strict';
const data = JSON.parse(document.getElementById('chart-data').textContent);
const style = getComputedStyle(document.documentElement);
const colour = (name) => style.getPropertyValue('--' + name).trim();
const [ink, soft, rule, blue, sky, amber, slate] = ['ink', 'soft', 'rule', 'blue', 'sky', 'amber', 'slate'].map(colour);
const finite = (value) => value !== null && Number.isFinite(value);
const short = (value) => (finite(value) ? String(Number(value.toPrecision(4))) : 'not computed');
const plain = (value) => String(value).replace('-', '\u2212');
const charts = [];
const axisWidth = 66;  // one left edge for charts that stand above one another

// "10⁴" for powers of ten, nothing for the ticks between them.
function powerOfTen(value) {
  const exponent = Math.round(Math.log10(value));
  if (Math.abs(value / Math.pow(10, exponent) - 1) > 1e-6) return '';
  if (exponent >= 0 && exponent <= 3) return String(Math.pow(10, exponent));
  return '10' +
      String(exponent).replace(
          /./g, (c) => (c === '-' ? '\u207b' : '\u2070\u00b9\u00b2\u00b3\u2074\u2075\u2076\u2077\u2078\u2079'[+c]));
}

// Error bars: options {bars: [{x, lower, upper, colour}]}, clipped to the plot.
const errorBars = {
  id: 'errorBars',
  beforeDatasetsDraw(chart, _args, options) {
    const {ctx, chartArea: area, scales: {x, y}} = chart;
    ctx.save();
    ctx.lineWidth = 1;
    for (const bar of options.bars || []) {
      if (bar.upper <= y.min) continue;
      const at = x.getPixelForValue(bar.x);
      const top = Math.max(area.top, y.getPixelForValue(bar.upper));
      const open = bar.lower <= y.min;
      const bottom = open ? area.bottom : y.getPixelForValue(bar.lower);
      ctx.strokeStyle = bar.colour;
      ctx.beginPath();
      ctx.moveTo(at, top);
      ctx.lineTo(at, bottom);
      for (const end of open ? [top] : [top, bottom]) {
        ctx.moveTo(at - 3, end);
        ctx.lineTo(at + 3, end);
      }
      ctx.stroke();
    }
    ctx.restore();
  },
};

// Horizontal lines with words above or below them: options {lines: [{value, text, below}]}.
const marks = {
  id: 'marks',
  beforeDatasetsDraw(chart, _args, options) {
    const {ctx, chartArea: area, scales: {y}} = chart;
    ctx.save();
    ctx.font = '11px ' + Chart.defaults.font.family;
    ctx.textAlign = 'right';
    ctx.strokeStyle = ctx.fillStyle = amber;
    ctx.setLineDash([5, 3]);
    for (const line of options.lines || []) {
      const at = y.getPixelForValue(line.value);
      ctx.beginPath();
      ctx.moveTo(area.left, at);
      ctx.lineTo(area.right, at);
      ctx.stroke();
      ctx.fillText(line.text, area.right - 4, at + (line.below ? 12 : -4));
    }
    ctx.restore();
  },
};

// The searched square and the middle of the frame: options {middle: [x, y], search}.
const frame = {
  id: 'frame',
  afterDatasetsDraw(chart, _args, options) {
    const {ctx, scales: {x, y}} = chart;
    const [mx, my] = options.middle;
    const [px, py] = [x.getPixelForValue(mx), y.getPixelForValue(my)];
    ctx.save();
    ctx.strokeStyle = ink;
    ctx.beginPath();
    ctx.moveTo(px - 9, py);
    ctx.lineTo(px + 9, py);
    ctx.moveTo(px, py - 9);
    ctx.lineTo(px, py + 9);
    ctx.stroke();
    if (options.search > 0) {
      const half = x.getPixelForValue(mx + options.search) - px;
      ctx.setLineDash([5, 3]);
      ctx.strokeStyle = amber;
      ctx.strokeRect(px - half, py - half, 2 * half, 2 * half);
    }
    ctx.restore();
  },
};

function draw(id, type, datasets, options) {
  const canvas = document.getElementById('chart-' + id);
  if (!canvas) return;
  options.plugins = Object.assign({legend: {display: false}}, options.plugins);
  options.layout = Object.assign({autoPadding: false, padding: {top: 8, right: 12, bottom: 4}}, options.layout);
  options.plugins.tooltip = Object.assign({displayColors: false, backgroundColor: ink}, options.plugins.tooltip);
  const plugins = [errorBars, marks].concat(options.plugins.frame ? [frame] : []);
  charts.push(new Chart(canvas, {type, data: {datasets}, options, plugins}));
}

// An axis over whole numbers, with a tick at every multiple of `step`.
function wholeAxis(first, last, step, title) {
  const ticks = [];
  for (let n = Math.ceil(first / step) * step; n <= last; n += step) ticks.push({value: n});
  return {
    type: 'linear',
    min: first - 0.6,
    max: last + 0.6,
    title: {display: title !== '', text: title},
    offset: false,  // bar charts would otherwise shift their axis against the charts above and below
    afterBuildTicks: (axis) => {
      axis.ticks = ticks.slice();
    },
    ticks: {callback: (value) => value, autoSkipPadding: 6, maxRotation: 0},
    grid: {color: rule, offset: false},
  };
}

function valueAxis(title, more) {
  return Object.assign(
      {
        title: {display: true, text: title},
        grid: {color: rule},
        afterFit: (axis) => {
          axis.width = axisWidth;
        }
      },
      more);
}

function logAxis(title, min, max) {
  return valueAxis(title, {
    type: 'logarithmic',
    min,
    max,
    ticks: {callback: powerOfTen},
    grid: {color: (context) => (context.tick && powerOfTen(context.tick.value) ? rule : 'transparent')},
  });
}

const tip = (lines) => ({callbacks: {title: () => '', label: lines}});

// Points on a logarithmic axis: what is not above `floor` stands on it as an open triangle.
function edgePoints(at, values, floor, shade) {
  const above = values.map((value) => finite(value) && value > floor);
  return {
    data: at.map((x, i) => ({x, y: finite(values[i]) ? Math.max(values[i], floor) : null})),
    pointStyle: above.map((yes) => (yes ? 'circle' : 'triangle')),
    rotation: above.map((yes) => (yes ? 0 : 180)),
    backgroundColor: above.map((yes, i) => (yes ? shade[i] : '#fff')),
    borderColor: shade,
    borderWidth: above.map((yes) => (yes ? 0 : 1.4)),
  };
}

function spectrum({order, power, se, noise, fold}) {
  const positive = power.concat(noise).filter((value) => finite(value) && value > 0);
  const tops = power.map((value, i) => (finite(value) ? value + 2 * (se[i] || 0) : 0)).concat(positive);
  const high = Math.max(...tops, Number.MIN_VALUE);
  if (!(high > Number.MIN_VALUE)) return;
  // The axis ends where values drown in their errors, seven decades down at most: what is weaker stands at its edge.
  const errors = se.filter(finite).sort((a, b) => a - b);
  const typical = errors.length ? errors[Math.floor(errors.length / 2)] : 0;
  const low = positive.length ? Math.min(...positive) * 0.7 : high / 10;
  const floor = Math.min(high / 10, Math.max(low, typical / 4, high * 1e-7));
  const isMultiple = (n) => fold > 0 && n > 0 && n % fold === 0;
  const shade = order.map((n) => (isMultiple(n) ? blue : slate));
  const shown = power.map((value) => finite(value) && value > floor);
  const bars = [];
  order.forEach((n, i) => {
    if (finite(power[i]) && finite(se[i]))
      bars.push({x: n, lower: power[i] - 2 * se[i], upper: power[i] + 2 * se[i], colour: shade[i]});
  });
  const last = order[order.length - 1];
  const step = fold > 0 ? fold * Math.ceil(last / (fold * 24)) : Math.max(1, Math.ceil(last / 24));
  const points = Object.assign(edgePoints(order, power, floor, shade), {
    radius: order.map((n, i) => (shown[i] && !isMultiple(n) ? 3 : 4.5)),
    clip: false,
    order: 1,
  });
  const noiseFloor = {
    data: order.map((n, i) => ({x: n, y: finite(noise[i]) && noise[i] > 0 ? noise[i] : null})),
    showLine: true,
    stepped: 'middle',
    radius: 0,
    hitRadius: 0,
    borderColor: amber,
    borderWidth: 1.5,
    borderDash: [5, 3],
    fill: 'start',
    backgroundColor: '#b85c0014',
    order: 2,
  };
  const words = ({dataIndex: i}) =>
      [`n = ${order[i]}`, `power ${plain(short(power[i]))}`, `standard error ${short(se[i])}`,
       `noise ${short(noise[i])}`];
  draw('spectrum', 'scatter', [points, noiseFloor], {
    scales: {
      x: wholeAxis(order[0], last, step, 'angular order n'),
      y: logAxis('power (image units\u00b2 px\u00b2)', floor, high * 1.5),
    },
    plugins: {errorBars: {bars}, tooltip: tip(words)},
  });
}

function evidence({first, median, lower, upper, count, visibility, marks: levels}) {
  const last = first + median.length - 1;
  const points = (values) => values.map((y, i) => ({x: first + i, y}));
  const line = {borderWidth: 0, radius: 0, hitRadius: 0};
  const about = (i) =>
      [`N = ${first + i}`, `median ${plain(short(median[i]))}`,
       `band ${plain(short(lower[i]))} to ${plain(short(upper[i]))}`];
  draw(
      'evidence', 'scatter',
      [
        {
          data: points(median),
          showLine: true,
          borderColor: blue,
          backgroundColor: blue,
          borderWidth: 2,
          radius: 3,
          order: 1
        },
        Object.assign({data: points(upper), showLine: true, fill: '+1', backgroundColor: sky, order: 2}, line),
        Object.assign({data: points(lower), showLine: true, order: 2}, line),
      ],
      {
        scales: {
          x: wholeAxis(first, last, 1, count.length || visibility.length ? '' : 'fold N'),
          y: valueAxis('ln Bayes factor', {
            ticks: {callback: plain},
            grid: {color: (context) => (context.tick && context.tick.value === 0 ? slate : rule)}
          }),
        },
        plugins: {tooltip: tip(({dataIndex: i}) => about(i))},
      });
  draw('preferred', 'bar', [{data: points(count), backgroundColor: slate, barPercentage: 0.7, categoryPercentage: 1}], {
    scales: {
      x: wholeAxis(first, last, 1, visibility.length ? '' : 'fold N'),
      y: valueAxis('images', {beginAtZero: true, ticks: {precision: 0}})
    },
    plugins: {tooltip: tip(({dataIndex: i}) => [`N = ${first + i}`, `${count[i]} images`])},
  });
  const dots = edgePoints(median.map((_, i) => first + i), visibility, 1, median.map(() => blue));
  const lines = [
    {value: levels[0], text: `ν ${levels[0]}: found in half of the cases`, below: true},
    {value: levels[1], text: `ν ${levels[1]}: found in four of five`},
  ];
  const high = Math.max(300, ...visibility.filter(finite)) * 1.5;
  draw('visibility', 'scatter', [Object.assign(dots, {radius: 4, clip: false})], {
    scales: {x: wholeAxis(first, last, 1, 'fold N'), y: logAxis('visibility ν', 1, high)},
    plugins: {
      marks: {lines},
      tooltip: tip(({dataIndex: i}) => [`N = ${first + i}`, `visibility ${plain(short(visibility[i]))}`]),
    },
  });
}

function centres({x, y, middle, search, reach}) {
  const half = Math.max(reach, 0.5) * 1.1;
  const step =
      [1, 2, 5, 10].map((s) => s * Math.pow(10, Math.floor(Math.log10(half / 2)))).find((s) => s >= half / 3.5);
  // Equal margins on a square canvas make the two axes equal.
  const axis = (at, title, side) => ({
    type: 'linear',
    min: at - half,
    max: at + half,
    title: {display: true, text: title},
    grid: {color: rule},
    ticks: {includeBounds: false, maxRotation: 0, stepSize: step, callback: (value) => plain(Number(value.toFixed(2)))},
    afterFit: (scale) => {
      scale[side] = 58;
    },
  });
  draw(
      'centres', 'scatter', [{
        data: x.map((value, i) => ({x: value, y: y[i]})),
        radius: x.length > 1000 ? 1.6 : 2.6,
        borderWidth: 0,
        backgroundColor: blue + (x.length > 1000 ? '59' : '8c'),
      }],
      {
        layout: {padding: {top: 12, right: 12, bottom: 0}},
        scales: {
          x: axis(middle[0], 'x (px)', 'height'),
          y: Object.assign(axis(middle[1], 'y (px, downwards)', 'width'), {reverse: true})
        },
        plugins: {frame: {middle, search}, tooltip: tip(({raw}) => `x ${raw.x}, y ${raw.y} px`)},
      });
}

function errors({width, count}) {
  const round = (value) => Number(value.toPrecision(6));
  draw(
      'errors', 'bar', [{
        data: count.map((images, i) => ({x: (i + 0.5) * width, y: images})),
        backgroundColor: slate,
        barPercentage: 0.92,
        categoryPercentage: 1,
      }],
      {
        layout: {padding: {top: 12, right: 12, bottom: 0}},
        scales: {
          x: {
            type: 'linear',
            min: 0,
            max: count.length * width,
            offset: false,
            grid: {display: false},
            title: {display: true, text: 'standard error (px)'},
            afterFit: (axis) => {
              axis.height = 58;
            },
            afterBuildTicks: (axis) => {
              axis.ticks = count.concat(0).map((_, i) => ({value: i * width}));
            },
            ticks: {callback: round, maxRotation: 0, autoSkipPadding: 14},
          },
          y: {beginAtZero: true, title: {display: true, text: 'images'}, ticks: {precision: 0}, grid: {color: rule}},
        },
        plugins: {
          tooltip:
              tip(({dataIndex: i}) => [`${round(i * width)} to ${round((i + 1) * width)} px`, `${count[i]} images`])
        },
      });
}

function overlaySwitch() {
  const button = document.getElementById('overlay-switch');
  if (!button) return;
  button.hidden = false;
  button.addEventListener('click', () => {
    const bare = document.querySelector('.montage').classList.toggle('bare');
    button.textContent = bare ? 'Show centres and disks' : 'Hide centres and disks';
  });
}

// On paper: the lists of skipped images and of provenance are unfolded, charts are drawn at the size of the sheet.
function printing() {
  let opened = [];
  addEventListener('beforeprint', () => {
    opened = Array.from(document.querySelectorAll('details[data-print]:not([open])'));
    for (const block of opened) block.open = true;
    for (const chart of charts) {
      const half = chart.canvas.closest('.pair') !== null;
      chart.resize(half ? 330 : 680, half ? 330 : chart.canvas.parentNode.clientHeight);
    }
  });
  addEventListener('afterprint', () => {
    for (const block of opened) block.open = false;
    for (const chart of charts) chart.resize();
  });
}

Chart.defaults.font.family = getComputedStyle(document.body).fontFamily;
Chart.defaults.font.size = 12;
Chart.defaults.color = soft;
Chart.defaults.animation = false;
Chart.defaults.maintainAspectRatio = false;
Chart.defaults.devicePixelRatio = Math.max(2, window.devicePixelRatio);  // sharp on paper too

overlaySwitch();
printing();
for (const [name, drawChart] of Object.entries({spectrum, evidence, centres, errors}))
  if (data[name]) drawChart(data[name]);
})();
