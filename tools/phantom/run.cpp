#include "phantom/run.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <limits>
#include <map>
#include <memory>

#include "common/command_line.hpp"
#include "common/csv_writer.hpp"
#include "common/image_flags.hpp"
#include "common/parse.hpp"
#include "common/session.hpp"
#include "phantom/generator.hpp"
#include "tambour/error.hpp"

namespace tambour::tools::phantom {
namespace {

constexpr std::int64_t most_images = 100'000'000;
constexpr std::int64_t largest_side = 16384;
constexpr double radius_share = 0.375;  // of the shorter side, where no radius is given

struct Flags {
  std::string truth;
  std::string size = "64";
  std::string mix = "ring:12";
  std::string noise = "white";
  std::optional<double> radius;
  std::optional<double> pixel_size;
  std::string unit;
  std::int64_t images = 100;
  std::int64_t seed = 1;
  GeneratorOptions generator;

  void add_to(CommandLine& line) {
    line.add_text("--truth", truth, "FILE", "Table of what each image is");
    line.add_integer("--images", images, 1, most_images, "Number of images");
    line.add_text("--size", size, "N|CxR", "Side of the frame in pixels, or columns x rows");
    line.add_number("--radius", radius, "Radius of the disk in pixels (default: 0.375 of the shorter side)");
    line.add_text("--mix", mix, "KIND[:N][=SHARE],…", "Kinds: ring:N, broken:N, scattered:N, blobs[:N], field, noise");
    line.add_number("--snr", generator.snr, "Variance of the signal over the disk / variance of the noise");
    line.add_choice("--noise", noise, {"white", "coloured", "none"}, "Noise of standard deviation 1");
    line.add_number("--centre-spread", generator.centre_spread, "Centres lie within this many pixels of the middle");
    line.add_number("--gradient", generator.gradient, "Uneven background, rms as a share of the signal's");
    line.add_number("--contaminant", generator.contaminant,
                    "A neighbour that reaches in, rms as a share of the signal's");
    line.add_flag("--vary", generator.vary, "Draw the assembly's parameters per image, not once per kind");
    line.add_integer("--seed", seed, 0, std::numeric_limits<std::int64_t>::max(), "Same seed, same stack");
    line.add_number("--pixel-size", pixel_size, "Written into the stack");
    line.add_text("--unit", unit, "UNIT", "Unit of --pixel-size: angstrom (default), nanometre, micrometre, …");
  }

  GeneratorOptions resolve() const;
};

void require_within(const char* flag, double value, double lowest, double highest) {
  if (!(value >= lowest && value <= highest))
    throw Error(ErrorCode::invalid_argument,
                fmt::format("{} is {:.6g}; allowed is {:.6g} to {:.6g}", flag, value, lowest, highest));
}

GeneratorOptions Flags::resolve() const {
  GeneratorOptions options = generator;
  const auto sides = split(size, 'x');
  if (sides.size() > 2)
    throw Error(ErrorCode::invalid_argument, fmt::format("--size is '{}'; allowed is N or CxR", size));
  for (const auto& side : sides) {
    const auto pixels = parse_integer("--size", side);
    if (pixels < 8 || pixels > largest_side)
      throw Error(ErrorCode::invalid_argument, fmt::format("--size has {}; allowed is 8 to {}", pixels, largest_side));
  }
  options.columns = parse_integer("--size", sides.front());
  options.rows = parse_integer("--size", sides.back());
  options.radius = radius.value_or(radius_share * static_cast<double>(std::min(options.rows, options.columns)));
  options.mix = parse_mix(mix);
  options.noise = noise == "white" ? Noise::white : noise == "none" ? Noise::none : Noise::coloured;
  options.seed = static_cast<std::uint64_t>(seed);
  require_within("--radius", options.radius, 4, largest_side);
  require_within("--snr", options.snr, 0, 1e6);
  require_within("--centre-spread", options.centre_spread, 0, largest_side);
  require_within("--gradient", options.gradient, 0, 1e6);
  require_within("--contaminant", options.contaminant, 0, 1e6);
  return options;
}

class TruthTable {
 public:
  TruthTable(const std::string& path, const CommandLine& line, const Session& session) {
    if (path.empty()) return;
    table_ = std::make_unique<CsvWriter>(path, line.force());
    session.describe_in(*table_);
    table_->comment(
        "centres in absolute pixels; angle in degrees within 360/fold; information: Fisher, per axis, 1/px^2");
    table_->row({"image", "kind", "fold", "centre_x", "centre_y", "angle", "snr", "information"});
  }

  void add(std::size_t image, const Truth& truth, double snr) {
    if (!table_) return;
    const auto of_centre = [&](double Centre::*part) {
      return truth.centre ? cell(*truth.centre.*part) : std::string();
    };
    table_->row({std::to_string(image), text_cell(truth.kind), truth.fold ? std::to_string(*truth.fold) : "",
                 of_centre(&Centre::x), of_centre(&Centre::y), cell(truth.angle), cell(snr), cell(truth.information)});
  }

  void commit() {
    if (table_) table_->commit();
  }

 private:
  std::unique_ptr<CsvWriter> table_;
};

}  // namespace

int run(const Arguments& arguments, std::ostream& out, std::ostream& err) {
  CommandLine line("tambour-phantom", "Makes an invented stack of images with known truth.");
  Flags flags;
  flags.add_to(line);
  if (!line.parse(arguments, out)) return 0;
  const GeneratorOptions options = flags.resolve();
  const Generator generator(options);
  const auto images = static_cast<std::size_t>(flags.images);
  const auto pixel_size = pixel_size_of(flags.pixel_size, flags.unit).value_or(PixelSize{});

  Session session(line, out, err);
  const auto stack =
      create_stack(line.out(), {images, options.rows, options.columns, pixel_size, PixelType::float32}, line.force());
  TruthTable table(flags.truth, line, session);
  const double nan = std::numeric_limits<double>::quiet_NaN();
  std::map<std::string, std::size_t> count_of;

  const std::size_t batch = 8 * static_cast<std::size_t>(line.threads());
  for (std::size_t first = 0; first < images; first += batch) {
    stop_if_interrupted();
    const std::size_t count = std::min(batch, images - first);
    std::vector<Picture> pictures(count, Picture(options.rows, options.columns));
    std::vector<Truth> truths(count);
    session.executor().run(count,
                           [&](std::size_t task, int) { pictures[task] = generator.make(first + task, truths[task]); });
    for (std::size_t i = 0; i < count; ++i) {
      stack->append(pictures[i].view());
      const bool silent = options.noise == Noise::none;
      table.add(first + i, truths[i], silent ? nan : truths[i].centre ? options.snr : 0);
      ++count_of[truths[i].kind];
    }
    session.progress().advance("make", first + count, images);
  }
  stop_if_interrupted();
  stack->finish();
  table.commit();

  session.wrote("stack", line.out());
  if (!flags.truth.empty()) session.wrote("truth", flags.truth);
  session.say(fmt::format("{}: {} images of {} by {} px, radius {:.6g} px", line.out(), images, options.columns,
                          options.rows, options.radius));
  auto counts = nlohmann::ordered_json::object();
  for (const auto& kind : options.mix) {
    session.say(fmt::format("  {:<14} {}", kind.name, count_of[kind.name]));
    counts[kind.name] = count_of[kind.name];
  }
  session.result("images", images);
  session.result("radius", options.radius);
  session.result("kinds", counts);
  return session.finish(0);
}

}  // namespace tambour::tools::phantom
