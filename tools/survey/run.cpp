#include "survey/run.hpp"

#include <fmt/chrono.h>
#include <fmt/format.h>

#include <ctime>

#include "common/centre_limits.hpp"
#include "common/coefficient_sink.hpp"
#include "common/geometry_flags.hpp"
#include "common/image_flags.hpp"
#include "common/image_rows.hpp"
#include "common/pattern_angles.hpp"
#include "common/preparation_flags.hpp"
#include "common/study_flags.hpp"
#include "common/symmetry_flags.hpp"
#include "survey/groups.hpp"
#include "survey/outputs.hpp"
#include "survey/report_collector.hpp"

namespace tambour::tools::survey {
namespace {

struct Flags {
  ImageFlags images;
  GeometryFlags geometry;
  PreparationFlags preparation;
  SymmetryFlags symmetry;
  StudyFlags study;
  SkipFlags skip;
  std::string title = "Survey of round objects";

  void add_to(CommandLine& line) {
    images.add_to(line);
    geometry.add_to(line, GeometryFlags::Radius::number_or_auto, StackStudyOptions{}.geometry.bandlimit);
    study.add_search(line);
    study.add_precision(line);
    symmetry.add_to(line);
    preparation.add_to(line, Background::quadratic);
    study.add_batch(line);
    skip.add_to(line);
    line.add_text("--title", title, "TEXT", "Headline of the report");
  }
};

/// What was asked, in words.
std::vector<std::pair<std::string, std::string>> settings_of(const StackStudyOptions& options,
                                                             bool noise_from_outside) {
  const auto& p = options.preparation;
  return {{"Edge condition", to_string(options.geometry.edge)},
          {"Band limit", fmt::format("{:.6g} of the pixel band", options.geometry.bandlimit)},
          {"Folds tested", fmt::format("{} to {}", options.symmetry.first_fold, options.symmetry.last_fold)},
          {"Level of the test", fmt::format("p_noise below {:.6g}", options.symmetry.alpha)},
          {"Background",
           p.background == Background::none
               ? "left as it is"
               : fmt::format("{} polynomial, fitted just outside the disk and subtracted", to_string(p.background))},
          {"Contrast", p.invert_contrast ? "inverted" : "as in the file"},
          {"Scaling", p.scaling == Scaling::none ? "image units" : "standard deviation outside the disk = 1"},
          {"Noise measured", noise_from_outside ? "outside the disk, image by image"
                                                : "in high angular orders, for want of room outside the disk"},
          {"Precision", options.double_precision ? "double" : "single"}};
}

}  // namespace

int run(const Arguments& arguments, std::ostream& out, std::ostream& err) {
  CommandLine line("tambour-survey",
                   "Centres, symmetry, rotational spectra and descriptors of a stack, with a report.");
  Flags flags;
  flags.add_to(line);
  if (!line.parse(arguments, out)) return 0;
  Session session(line, out, err);

  const auto source = flags.images.open(session);
  StackStudyOptions options;
  options.geometry = flags.geometry.resolve(*source, flags.study.search(), session);
  options.symmetry = flags.symmetry.resolve(options.geometry, session);
  flags.study.apply(options);
  require_room_to_search(*source, options.geometry.radius);
  options.preparation = flags.preparation.resolve(source->rows(), source->columns(), options.geometry.radius, session);
  const SurveyPaths paths(line.out());
  refuse_inputs_as_outputs(source->files(), paths.all());
  prepare_folder(line.out(), paths, line.force());

  session.progress().advance("plan", 0, 1);
  const StackStudyPlan plan(options, source->rows(), source->columns(), session.executor());
  BatchOutputs outputs(paths, plan, header_of(plan, *source, session), source->images(), session, line.force());
  ReportCollector collector(plan, source->images());
  std::vector<ImageRow> rows;
  CentreLimits limits(options.search, options.geometry.radius, source->rows(), source->columns());
  PatternAngles pattern_angles(plan.basis());
  plan.run(*source, {}, {}, session.executor(), session.progress(), [&](const StudyBatch& batch) {
    outputs.take(batch, session.executor());
    collector.take(batch);
    for (std::size_t i = 0; i < batch.images.size(); ++i) {
      const ImageStudy& study = batch.images[i];
      rows.push_back(row_of(study));
      limits.see(study);
      if (study.status.ok())
        pattern_angles.add(study, batch.coefficients.row(static_cast<std::ptrdiff_t>(i)));
      else
        session.skip(study.image, study.source, study.status.reason);
    }
  });
  limits.report(session);
  const Provenance provenance = session.provenance(source->files());
  const auto angles = pattern_angles.angles();
  CsvWriter images(paths.images, line.force());
  session.describe_in(images);
  write_image_table(rows, angles, options, images);
  stop_if_interrupted();
  outputs.finish_coefficients(provenance);

  ReportData report;
  report.title = flags.title;
  report.date = fmt::format("{:%Y-%m-%d %H:%M}", fmt::localtime(std::time(nullptr)));
  report.provenance = provenance;
  report.settings = settings_of(options, plan.noise_from_outside());
  report.remarks = session.remarks();
  report.rows = source->rows();
  report.columns = source->columns();
  report.pixel_size = source->pixel_size();
  report.radius = options.geometry.radius;
  report.search = limits.searched();
  collector.fill(report);
  report.groups = make_groups(paths.coefficients, plan, rows, angles, session);
  OutputFile page(paths.report, line.force());
  page.write(render_report(report));
  outputs.finish_tables(provenance);
  images.commit();
  page.commit();

  session.wrote("images", paths.images);
  session.wrote("centres", paths.centres);
  session.wrote("orders", paths.orders);
  session.wrote("coefficients", paths.coefficients);
  session.wrote("descriptors", paths.descriptors);
  session.wrote("descriptor_layout", paths.descriptor_layout);
  session.wrote("report", paths.report);
  session.result("images", source->images());
  session.result("radius", options.geometry.radius);
  session.say(fmt::format("{}: {} images, radius {:.6g} px", line.out(), source->images(), options.geometry.radius));
  summarise(rows, session);
  session.say(fmt::format("report: {}", paths.report));
  return session.finish(flags.skip.max_skipped());
}

}  // namespace tambour::tools::survey
