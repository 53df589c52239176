// The files of a survey's folder.
#pragma once

#include <memory>
#include <optional>
#include <string>
#include <vector>

#include "common/coefficient_sink.hpp"
#include "common/csv_writer.hpp"
#include "common/descriptor_layout.hpp"
#include "common/session.hpp"
#include "tambour/descriptors.hpp"
#include "tambour/matrix_file.hpp"
#include "tambour/stack_study.hpp"

namespace tambour::tools::survey {

/// Paths inside the folder.
struct SurveyPaths {
  explicit SurveyPaths(const std::string& folder);

  std::string images, centres, orders, coefficients, descriptors, descriptor_layout, report;

  std::vector<std::string> all() const;
};

/// Makes the folder if need be and checks that every file could be written, before any work is done.
/// Throws Error(cannot_write): a file in its place, read-only, or files of an earlier survey without `overwrite`.
void prepare_folder(const std::string& folder, const SurveyPaths& paths, bool overwrite);

/// Writes centres, orders, coefficients and descriptors while the batches pass by. The report reads the coefficients
/// once more, so they are put in place first, and taken away again when the rest does not follow.
class BatchOutputs {
 public:
  BatchOutputs(const SurveyPaths& paths, const StackStudyPlan& plan, const CoefficientHeader& header,
               std::size_t images, const Session& session, bool overwrite);

  void take(const StudyBatch& batch, Executor& executor);
  ~BatchOutputs();
  BatchOutputs(const BatchOutputs&) = delete;
  BatchOutputs& operator=(const BatchOutputs&) = delete;

  void finish_coefficients(const Provenance& provenance);
  void finish_tables(const Provenance& provenance);

 private:
  void write_orders(const StudyBatch& batch, Executor& executor);
  void write_descriptors(const StudyBatch& batch, Executor& executor);

  const StackStudyPlan& plan_;
  SurveyPaths paths_;
  bool overwrite_;
  std::size_t images_;
  Descriptor descriptor_;
  CsvWriter centres_, orders_;
  CoefficientSink coefficients_;
  std::unique_ptr<MatrixWriter> descriptors_;
  std::vector<std::size_t> skipped_;
  bool coefficients_alone_ = false;  // in place, and nothing else yet
};

}  // namespace tambour::tools::survey
