// The HTML report: what is escaped, what is left out, what the page may load, and whether its numbers are those given.
#include "tambour/report.hpp"

#include <gtest/gtest.h>

#include <cmath>
#include <limits>
#include <nlohmann/json.hpp>
#include <numeric>
#include <regex>
#include <string>

#include "report/facts.hpp"
#include "report/picture.hpp"
#include "report/text.hpp"
#include "tambour/error.hpp"

namespace tambour {
namespace {

constexpr double kNan = std::numeric_limits<double>::quiet_NaN();
constexpr double kInfinity = std::numeric_limits<double>::infinity();
const std::string kNastyName = "<b>.mrc\"'</script><script>alert(1)</script>&";

ReportPicture ramp(std::ptrdiff_t rows, std::ptrdiff_t columns) {
  ReportPicture picture{rows, columns, std::vector<float>(static_cast<std::size_t>(rows * columns))};
  std::iota(picture.pixels.begin(), picture.pixels.end(), 0.0F);
  return picture;
}

ReportData survey() {
  ReportData data;
  data.title = "Rings & " + kNastyName;
  data.date = "2024-05-14";
  data.provenance = {"tambour-survey '" + kNastyName + "'",
                     "9.8.7",
                     {{"FFTW", "3.3.10"}},
                     {{"radius", "12"}},
                     {{kNastyName, std::string(64, 'a')}}};
  data.settings = {{"Folds <tested>", "2 to 4"}};
  data.remarks = {kNastyName + ": colour, read as luma"};
  data.images = 100;
  data.analysed = 97;
  data.rows = data.columns = 32;
  data.pixel_size = {1.5, "nanometre"};
  data.radius = 12;
  data.search = 4;
  data.verdicts = {{"inconclusive", 0, 37}, {"best_supported", 3, 21}, {"best_supported", 4, 39}};
  data.montage = {{7, kNastyName, ramp(32, 32), {15.5, 14.25}, "best_supported", 4}};
  data.spectrum = {{0, 100, 1, 2}, {1, -3, 1, 2}, {2, kNan, kInfinity, 2}};
  data.ln_bf_median = {-1, 2.5, kNan};
  data.ln_bf_lower = {-2, 1, -kInfinity};
  data.ln_bf_upper = {0, 4, kInfinity};
  data.best_fold_count = {10, 40, 47};
  data.mean_visibility = {5, 36, kNan};
  data.centres = {{15, 16, 0.25, 0.25}, {kNan, 16, kNan, 0.1}, {16, 15, 0.5, 0.5}};
  data.rebuilds = {{7, ramp(32, 32), ramp(32, 32), ramp(32, 32), 0.625}};
  data.groups = {{"inconclusive", 0, 37, {}, {{3, kNastyName, ramp(32, 32), {}, "inconclusive", 0}}},
                 {"best_supported", 4, 39, ramp(32, 32), {{7, kNastyName, ramp(32, 32), {}, "best_supported", 4}}}};
  for (std::size_t image : {5U, 6U, 8U})
    data.skipped.push_back({image, kNastyName, "pixel (3, 4) is <nan>; allowed is finite"});
  return data;
}

std::size_t occurrences(const std::string& text, const std::string& what) {
  std::size_t count = 0;
  for (std::size_t at = text.find(what); at != std::string::npos; at = text.find(what, at + what.size())) ++count;
  return count;
}

std::string between(const std::string& text, const std::string& from, const std::string& to) {
  const std::size_t begin = text.find(from);
  if (begin == std::string::npos) return "";
  return text.substr(begin + from.size(), text.find(to, begin) - begin - from.size());
}

// Everything before the first script: the markup, without Chart.js.
std::string markup(const std::string& page) { return page.substr(0, page.find("<script")); }

nlohmann::json chart_numbers(const std::string& page) {
  return nlohmann::json::parse(between(page, "id=\"chart-data\">", "</script>"));
}

TEST(Report, EscapesEveryText) {
  const std::string page = render_report(survey());
  EXPECT_EQ(occurrences(page, "<b>.mrc"), 0U);
  EXPECT_EQ(occurrences(page, "alert(1)</script>"), 0U);
  EXPECT_EQ(occurrences(page, "<tested>"), 0U);
  EXPECT_EQ(occurrences(page, "<nan>"), 0U);
  EXPECT_NE(page.find("Rings &amp; &lt;b&gt;.mrc&quot;&#39;&lt;/script&gt;"), std::string::npos);
  // Three scripts are opened and closed: the numbers, Chart.js, the page's own.
  EXPECT_EQ(occurrences(page, "<script"), 3U);
  EXPECT_EQ(occurrences(page, "</script"), 3U);
}

TEST(Report, EscapedTextIsUtf8) {
  EXPECT_EQ(report::escaped("a<b>&\"'"), "a&lt;b&gt;&amp;&quot;&#39;");
  EXPECT_EQ(report::escaped("µ Å 環"), "µ Å 環");
  EXPECT_EQ(report::escaped("x\xFFy"), "x\xEF\xBF\xBDy");              // no UTF-8 at all
  EXPECT_EQ(report::escaped("\xC0\xAF"), "\xEF\xBF\xBD\xEF\xBF\xBD");  // overlong '/'
  EXPECT_EQ(report::escaped(std::string("a\0b", 3)),
            "a\xEF\xBF\xBD"
            "b");
  EXPECT_EQ(report::escaped("cut \xE7\x92"), "cut \xEF\xBF\xBD\xEF\xBF\xBD");  // an unfinished character
  EXPECT_EQ(report::script_safe("{\"a\":\"</script><!--\"}"), "{\"a\":\"\\u003c/script>\\u003c!--\"}");
}

TEST(Report, NumbersThatAreNotFiniteAreNullInTheCharts) {
  const auto numbers = chart_numbers(render_report(survey()));
  EXPECT_EQ(numbers["spectrum"]["power"], nlohmann::json({100.0, -3.0, nullptr}));
  EXPECT_EQ(numbers["spectrum"]["se"][2], nullptr);
  EXPECT_EQ(numbers["evidence"]["median"], nlohmann::json({-1.0, 2.5, nullptr}));
  EXPECT_EQ(numbers["evidence"]["lower"][2], nullptr);
  EXPECT_EQ(numbers["evidence"]["upper"][2], nullptr);
  EXPECT_EQ(numbers["evidence"]["visibility"][2], nullptr);
  EXPECT_EQ(numbers["centres"]["x"].size(), 2U);  // a centre that is not finite is not drawn
  const std::string page = markup(render_report(survey()));
  EXPECT_FALSE(std::regex_search(page, std::regex("[>\" ]-?(nan|inf)[<\" %]")));
}

TEST(Report, NothingIsLoaded) {
  const std::string page = render_report(survey());
  EXPECT_EQ(occurrences(markup(page), "http"), 1U);  // http-equiv
  EXPECT_NE(page.find("default-src 'none'; img-src data:;"), std::string::npos);
  for (const char* loader : {"<link", "<iframe", "<object", "<embed", "@import", "url("})
    EXPECT_EQ(occurrences(markup(page), loader), 0U) << loader;
  const std::string own = page.substr(page.rfind("<script>"));
  for (const char* loader : {"http", "fetch(", "XMLHttpRequest", "import(", "WebSocket"})
    EXPECT_EQ(occurrences(own, loader), 0U) << loader;
  const std::regex reference("(src|href)=\"([^\"]{0,16})");
  for (std::sregex_iterator at(page.begin(), page.end(), reference), end; at != end; ++at) {
    const std::string target = (*at)[2];
    EXPECT_TRUE(target.starts_with("#") || target.starts_with("data:image/png;")) << target;
  }
}

TEST(Report, EverySectionIsThereOnceAndInTheContents) {
  const std::string page = render_report(survey());
  for (const char* id : {"summary", "settings", "images", "evidence", "spectrum", "centres", "rebuilt", "groups",
                         "skipped", "limits", "provenance"}) {
    EXPECT_EQ(occurrences(page, "<section id=\"" + std::string(id) + "\""), 1U) << id;
    EXPECT_GE(occurrences(page, "<a href=\"#" + std::string(id) + "\">"), 1U) << id;
  }
  for (const char* chart : {"evidence", "preferred", "visibility", "spectrum", "centres", "errors"})
    EXPECT_EQ(occurrences(page, "<canvas id=\"chart-" + std::string(chart) + "\" role=\"img\" aria-label="), 1U)
        << chart;
  EXPECT_NE(page.find("Chart.js 3."), std::string::npos);
  EXPECT_NE(page.find("Permission is hereby granted"), std::string::npos);
  EXPECT_NE(page.find(std::string(64, 'a')), std::string::npos);
  EXPECT_NE(page.find("Tambour 9.8.7"), std::string::npos);
}

TEST(Report, CountsAreThoseGiven) {
  const std::string page = render_report(survey());
  const std::string summary = between(page, "<section id=\"summary\"", "</section>");
  EXPECT_NE(summary.find("97 of 100 images were analysed"), std::string::npos);
  EXPECT_NE(summary.find("<strong>60 (60.0\u202F%)</strong> show more"), std::string::npos);
  EXPECT_NE(summary.find("<strong>4</strong>, in 39 images"), std::string::npos);
  EXPECT_NE(summary.find("4-fold, best supported"), std::string::npos);
  EXPECT_NE(summary.find("18 nm"), std::string::npos);    // radius 12 px of 1.5 nm
  EXPECT_NE(summary.find("0.38 px"), std::string::npos);  // median of 0.25 and 0.5
  EXPECT_LT(summary.find("4-fold, best"), summary.find("3-fold, best"));
  EXPECT_LT(summary.find("3-fold, best"), summary.find(">inconclusive<"));
  const auto skipped_row = std::regex("skipped</th>.*?<td class=\"n\">3</td><td class=\"n\">3.0");
  EXPECT_TRUE(std::regex_search(summary, skipped_row));
  const std::string skipped = between(page, "<section id=\"skipped\"", "</section>");
  EXPECT_EQ(occurrences(skipped, "allowed is finite"), 3U);
  EXPECT_NE(skipped.find("3 of 100 images were left out"), std::string::npos);
  const std::string rebuilt = between(page, "<section id=\"rebuilt\"", "</section>");
  EXPECT_EQ(occurrences(rebuilt, "<img alt="), 3U);
  EXPECT_NE(rebuilt.find("62.5\u202F% explained"), std::string::npos);
}

TEST(Report, LongListOfSkippedImagesIsCompleteAndFolded) {
  ReportData data = survey();
  data.images = 6000;
  data.skipped.assign(5000, {1, "stack.mrcs", "constant image"});
  const std::string skipped = between(render_report(data), "<section id=\"skipped\"", "</section>");
  EXPECT_EQ(occurrences(skipped, "constant image"), 5000U);
  EXPECT_NE(skipped.find("<details data-print>"), std::string::npos);
  EXPECT_NE(skipped.find("class=\"scroll\" tabindex=\"0\""), std::string::npos);
}

TEST(Report, GroupsComeInOrderOfVerdictMeanFirst) {
  const std::string groups = between(render_report(survey()), "<section id=\"groups\"", "</section>");
  EXPECT_LT(groups.find("4-fold, best supported <small>39 images"), groups.find("Inconclusive <small>37 images"));
  EXPECT_EQ(occurrences(groups, "class=\"mean\""), 1U);
  EXPECT_LT(groups.find("class=\"mean\""), groups.find("Image 7 from"));
}

TEST(Report, CentreAndDiskAreDrawnInPixelsOfTheFrame) {
  ReportData data = survey();
  data.montage[0].picture = ramp(16, 16);  // half the resolution of the frame
  const std::string images = between(render_report(data), "<section id=\"images\"", "</section>");
  EXPECT_NE(images.find("<svg viewBox=\"-0.5 -0.5 32 32\""), std::string::npos);
  EXPECT_NE(images.find("<circle cx=\"15.500\" cy=\"14.250\" r=\"12.000\"/>"), std::string::npos);
}

TEST(Report, EmptySurveySaysSo) {
  ReportData data;
  const std::string page = render_report(data);
  EXPECT_EQ(chart_numbers(page), nlohmann::json::object());
  EXPECT_EQ(occurrences(page, "<canvas"), 0U);
  for (const char* sentence :
       {"None of the 0 images could be analysed.", "No images were chosen to be shown.", "No fold was tested.",
        "No spectrum was computed.", "No centres were determined.", "No images were rebuilt.",
        "No images were grouped.", "No image was skipped.", "No input files were recorded."})
    EXPECT_EQ(occurrences(page, sentence), 1U) << sentence;
}

TEST(Report, MissingPicturesAreSaidToBeMissing) {
  ReportData data = survey();
  data.montage[0].picture = {};
  EXPECT_NE(render_report(data).find("no picture"), std::string::npos);
}

TEST(Report, RefusesDataThatContradictsItself) {
  ReportData lists = survey();
  lists.ln_bf_upper.pop_back();
  EXPECT_THROW(render_report(lists), Error);
  ReportData counts = survey();
  counts.best_fold_count = {1};
  EXPECT_THROW(render_report(counts), Error);
  ReportData picture = survey();
  picture.groups[1].examples[0].picture.rows = 31;
  EXPECT_THROW(render_report(picture), Error);
  ReportData analysed = survey();
  analysed.analysed = 101;
  try {
    render_report(analysed);
    FAIL() << "101 of 100 images were accepted";
  } catch (const Error& error) {
    EXPECT_EQ(error.code(), ErrorCode::invalid_argument);
    EXPECT_EQ(error.value(), "101");
  }
}

TEST(Report, ManyCentresAreThinnedInTheChartOnly) {
  ReportData data = survey();
  data.centres.assign(10001, {15, 16, 0.25, 0.25});
  const std::string page = render_report(data);
  const auto numbers = chart_numbers(page);
  EXPECT_EQ(numbers["centres"]["x"].size(), 3334U);  // one in three: the smallest step that leaves no more than 4000
  EXPECT_EQ(numbers["errors"]["count"].get<std::vector<std::size_t>>().back(), 10001U);
  EXPECT_NE(page.find("One centre in 3 is drawn."), std::string::npos);
}

TEST(ReportPicture, OneHotPixelDoesNotDarkenTheRest) {
  ReportPicture picture = ramp(20, 20);
  picture.pixels[17] = 1e9F;
  picture.pixels[18] = std::numeric_limits<float>::quiet_NaN();
  const auto range = report::robust_range(picture);
  EXPECT_NEAR(range.low, 2, 1);
  EXPECT_NEAR(range.high, 397, 2);
  const auto levels = report::grey_levels(picture, range);
  EXPECT_EQ(levels[0], 0);
  EXPECT_EQ(levels[17], 255);
  EXPECT_EQ(levels[18], 128);
  EXPECT_EQ(levels[399], 255);
}

TEST(ReportPicture, ConstantAndEmptyPicturesAreMidGrey) {
  const ReportPicture flat{1, 2, {3, 3}};
  EXPECT_EQ(report::grey_levels(flat, report::robust_range(flat)), (std::vector<std::uint8_t>{128, 128}));
  const ReportPicture none{1, 1, {std::nanf("")}};
  EXPECT_EQ(report::grey_levels(none, report::robust_range(none)), (std::vector<std::uint8_t>{128}));
}

TEST(ReportPicture, ResidualKeepsTheScaleOfItsOriginalAboutZero) {
  const auto range = report::about_zero({100, 140});
  const ReportPicture residual{1, 3, {-20, 0, 20}};
  EXPECT_EQ(report::grey_levels(residual, range), (std::vector<std::uint8_t>{0, 128, 255}));
}

TEST(ReportPicture, ReducingKeepsMeans) {
  ReportPicture picture = ramp(6, 4);
  const ReportPicture small = report::reduced(picture, 3);
  ASSERT_EQ(small.rows, 3);
  ASSERT_EQ(small.columns, 2);
  EXPECT_EQ(small.pixels, (std::vector<float>{2.5F, 4.5F, 10.5F, 12.5F, 18.5F, 20.5F}));
  picture.pixels[0] = std::nanf("");
  EXPECT_FLOAT_EQ(report::reduced(picture, 3).pixels[0], 10.0F / 3);  // mean of 1, 4, 5
  const ReportPicture odd = report::reduced(ramp(700, 1), 256);
  EXPECT_EQ(odd.rows, 256);
  EXPECT_EQ(odd.columns, 1);
}

TEST(ReportText, Numbers) {
  EXPECT_EQ(report::count_text(0), "0");
  EXPECT_EQ(report::count_text(1234), "1234");
  EXPECT_EQ(report::count_text(12345), "12\u202F345");
  EXPECT_EQ(report::count_text(1234567), "1\u202F234\u202F567");
  EXPECT_EQ(report::number_text(kNan), "–");
  EXPECT_EQ(report::number_text(-0.0), "0");
  EXPECT_EQ(report::share_text(1, 0), "–");
  EXPECT_EQ(report::share_text(1, 8), "12.5\u202F%");
  EXPECT_EQ(report::length_text(10, {2.1, "angstrom"}), "10 px (21 Å)");
  EXPECT_EQ(report::length_text(10, {}), "10 px");
  EXPECT_EQ(report::length_text(10, {1, "<u>"}), "10 px (10 &lt;u&gt;)");
}

TEST(ReportText, Base64) {  // RFC 4648, section 10
  const auto encode = [](const std::string& text) {
    return report::base64(std::vector<std::uint8_t>(text.begin(), text.end()));
  };
  EXPECT_EQ(encode(""), "");
  EXPECT_EQ(encode("f"), "Zg==");
  EXPECT_EQ(encode("fo"), "Zm8=");
  EXPECT_EQ(encode("foobar"), "Zm9vYmFy");
}

TEST(ReportFacts, QuantilesAndHistogramLeaveOutWhatIsNotFinite) {
  const std::vector<double> values{4, kNan, 1, 2, kInfinity, 3};
  EXPECT_DOUBLE_EQ(report::quantile(values, 0.5), 2.5);
  EXPECT_DOUBLE_EQ(report::quantile(values, 1), 4);
  EXPECT_TRUE(std::isnan(report::quantile(std::vector<double>{kNan}, 0.5)));
  std::vector<double> errors(99, 0.3);
  errors.push_back(50);
  const auto bins = report::histogram(errors);
  EXPECT_EQ(bins.above, 1U);
  EXPECT_EQ(std::accumulate(bins.counts.begin(), bins.counts.end(), std::size_t{0}), 100U);
  EXPECT_TRUE(report::histogram(std::vector<double>{kNan}).counts.empty());
  EXPECT_EQ(report::histogram(std::vector<double>{0, 0}).counts, (std::vector<std::size_t>{2}));
}

}  // namespace
}  // namespace tambour
