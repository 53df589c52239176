#include "locate/run.hpp"

#include <fmt/format.h>

#include "common/centre_rows.hpp"
#include "common/geometry_flags.hpp"
#include "common/image_flags.hpp"
#include "common/preparation_flags.hpp"
#include "common/study_flags.hpp"
#include "tambour/stack_study.hpp"

namespace tambour::tools::locate {
namespace {

struct Flags {
  ImageFlags images;
  GeometryFlags geometry;
  PreparationFlags preparation;
  StudyFlags study;
  SkipFlags skip;

  void add_to(CommandLine& line) {
    images.add_to(line);
    geometry.add_to(line, GeometryFlags::Radius::number_or_auto, StackStudyOptions{}.geometry.bandlimit);
    study.add_search(line);
    preparation.add_to(line, Background::quadratic);
    study.add_batch(line);
    skip.add_to(line);
  }
};

/// Centres that may lie further out than was searched.
class LimitWatch {
 public:
  void see(const ImageStudy& study) {
    if (study.status.ok() && study.centre.at_search_limit) images_.push_back(study.image);
  }

  void report(double search, Session& session) const {
    session.result("at_search_limit", images_);
    if (images_.empty()) return;
    std::string first = fmt::format("{}", images_.front());
    for (std::size_t i = 1; i < images_.size() && i < 10; ++i) first += fmt::format(", {}", images_[i]);
    session.remark(
        fmt::format("{} centre(s) lie on the border of the searched square of +-{:.6g} px and may lie beyond (image "
                    "{}{}): a larger "
                    "--search tells",
                    images_.size(), search, first, images_.size() > 10 ? ", …" : ""));
  }

 private:
  std::vector<std::size_t> images_;
};

}  // namespace

int run(const Arguments& arguments, std::ostream& out, std::ostream& err) {
  CommandLine line("tambour-locate", "Finds the rotation centre of every image of a stack.");
  Flags flags;
  flags.add_to(line);
  if (!line.parse(arguments, out)) return 0;
  Session session(line, out, err);
  check_writable(line.out(), line.force());

  const auto source = flags.images.open(session);
  StackStudyOptions options;
  options.geometry = flags.geometry.resolve(*source, flags.study.search(), session);
  options.test_symmetry = false;
  flags.study.apply(options);
  require_room_to_search(*source, options.geometry.radius);
  options.preparation = flags.preparation.resolve(source->rows(), source->columns(), options.geometry.radius, session);

  const StackStudyPlan plan(options, source->rows(), source->columns(), session.executor());
  CsvWriter table(line.out(), line.force());
  session.describe_in(table);
  write_centre_header(options, table);
  LimitWatch limits;
  plan.run(*source, {}, {}, session.executor(), session.progress(), [&](const StudyBatch& batch) {
    for (const auto& study : batch.images) {
      table.row(centre_row(study));
      limits.see(study);
      if (!study.status.ok()) session.skip(study.image, study.source, study.status.reason);
    }
  });
  stop_if_interrupted();
  table.commit();

  limits.report(options.search, session);
  const std::size_t located = source->images() - session.skipped();
  session.wrote("centres", line.out());
  session.result("images", source->images());
  session.result("located", located);
  session.result("radius", options.geometry.radius);
  session.say(fmt::format("{}: {} of {} images located, radius {:.6g} px", line.out(), located, source->images(),
                          options.geometry.radius));
  return session.finish(flags.skip.max_skipped());
}

}  // namespace tambour::tools::locate
