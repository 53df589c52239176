// Batches of a stack study into a coefficient file.
#pragma once

#include <optional>
#include <string>
#include <vector>

#include "common/session.hpp"
#include "tambour/coefficient_file.hpp"
#include "tambour/stack_study.hpp"

namespace tambour::tools {

/// What a plan tells of the file that will hold its coefficients; hashes of the inputs come last, with finish().
CoefficientHeader header_of(const StackStudyPlan& plan, const ImageSource& source, const Session& session);

/// The header of a coefficient file lists the nodes of the noise spectrum, which the first analysed image tells:
/// images skipped before it wait.
class CoefficientSink {
 public:
  CoefficientSink(std::string path, const DiskBasis& basis, CoefficientHeader header, bool overwrite);

  void take(const StudyBatch& batch);
  void finish(const Provenance& provenance);

 private:
  void open();

  std::string path_;
  DiskBasis basis_;
  CoefficientHeader header_;
  bool overwrite_;
  std::vector<CoefficientRecord> waiting_;
  std::optional<CoefficientWriter> writer_;
};

}  // namespace tambour::tools
