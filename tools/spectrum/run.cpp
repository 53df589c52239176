#include "spectrum/run.hpp"

#include <fmt/format.h>

#include "common/coefficient_batches.hpp"
#include "common/session.hpp"
#include "spectrum/power_rows.hpp"

namespace tambour::tools::spectrum {
namespace {

constexpr std::int64_t most_rings = 512;

struct Flags {
  std::string input;
  std::optional<std::int64_t> rings;
  bool mean = false;
  SkipFlags skip;

  void add_to(CommandLine& line) {
    line.add_input("coefficients", input, "File that tambour-analyse wrote");
    line.add_integer("--rings", rings, 1, most_rings,
                     "Rings of equal width from 0 to the radius (default: the whole disk)");
    line.add_flag("--mean", mean, "The mean over all images instead of every image");
    skip.add_to(line);
  }
};

/// Power of each analysed image of a batch, in its order; of skipped ones an empty table.
std::vector<PowerTable> powers_of(const CoefficientBatch& batch, const CoefficientHeader& header,
                                  const PowerOfImage& power, Executor& executor) {
  std::vector<PowerTable> tables(batch.size());
  executor.run(batch.size(), [&](std::size_t i, int) {
    if (batch.records[i].status.ok()) tables[i] = power.compute(batch.of(i), noise_of(header, batch.records[i]));
  });
  return tables;
}

}  // namespace

int run(const Arguments& arguments, std::ostream& out, std::ostream& err) {
  CommandLine line("tambour-spectrum", "Rotational power per angular order, with its noise and error.");
  Flags flags;
  flags.add_to(line);
  if (!line.parse(arguments, out)) return 0;
  Session session(line, out, err);
  check_writable(line.out(), line.force());

  session.refuse_as_output({flags.input});
  const CoefficientReader reader(flags.input);
  require_images(reader, flags.input);
  const std::int64_t rings = flags.rings.value_or(0);
  const PowerOfImage power(reader.basis(), static_cast<int>(rings));
  CsvWriter table(line.out(), line.force());
  session.describe_in(table);
  table.comment(fmt::format("radius: {:.10g} px", reader.header().geometry.radius));
  table.comment("power: image units squared times px^2, both signs of the order together, noise subtracted");
  table.row(power.header());
  MeanPower mean;
  std::size_t without_noise = 0;
  for_each_batch(reader, "spectrum", session, [&](const CoefficientBatch& batch) {
    name_skipped(batch, session);
    const auto tables = powers_of(batch, reader.header(), power, session.executor());
    for (std::size_t i = 0; i < batch.size(); ++i) {
      if (!batch.records[i].status.ok()) continue;
      const bool noise_known = !noise_of(reader.header(), batch.records[i]).empty();
      without_noise += noise_known ? 0 : 1;
      if (flags.mean)
        mean.add(tables[i], noise_known);
      else
        power.write(std::to_string(batch.first + i), tables[i], noise_known, table);
    }
  });
  if (flags.mean && mean.images() > 0) power.write("mean", mean.mean(), mean.noise_known(), table);
  table.commit();

  if (without_noise > 0)
    session.remark(
        fmt::format("{} image(s) have no noise spectrum: nothing is subtracted and no error is given", without_noise));
  session.wrote("orders", line.out());
  session.result("images", reader.images() - session.skipped());
  session.result("max_angular_order", reader.basis().max_order());
  session.result("rings", rings);
  session.say(fmt::format("{}: {} images, angular orders 0 to {}{}", line.out(), reader.images() - session.skipped(),
                          reader.basis().max_order(), flags.mean ? ", their mean" : ""));
  return session.finish(flags.skip.max_skipped());
}

}  // namespace tambour::tools::spectrum
