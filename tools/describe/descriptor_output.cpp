#include "describe/descriptor_output.hpp"

#include <fmt/format.h>

#include <filesystem>

#include "common/csv_writer.hpp"
#include "tambour/error.hpp"
#include "tambour/matrix_file.hpp"

namespace tambour::tools::describe {
namespace {

class CsvOutput final : public DescriptorOutput {
 public:
  CsvOutput(const std::string& path, const std::vector<std::string>& names, const Session& session, bool overwrite)
      : table_(path, overwrite) {
    session.describe_in(table_);
    std::vector<std::string> header{"image"};
    header.insert(header.end(), names.begin(), names.end());
    table_.row(header);
  }

  void append(MatrixView<const double> rows) override {
    for (std::ptrdiff_t i = 0; i < rows.rows; ++i) {
      std::vector<std::string> cells{std::to_string(image_++)};
      for (std::ptrdiff_t j = 0; j < rows.columns; ++j) cells.push_back(cell(rows(i, j)));
      table_.row(cells);
    }
  }

  void finish() override { table_.commit(); }

 private:
  CsvWriter table_;
  std::size_t image_ = 0;
};

class ArrayOutput final : public DescriptorOutput {
 public:
  explicit ArrayOutput(std::unique_ptr<MatrixWriter> writer) : writer_(std::move(writer)) {}

  void append(MatrixView<const double> rows) override { writer_->append(rows); }
  void finish() override { writer_->finish(); }

 private:
  std::unique_ptr<MatrixWriter> writer_;
};

}  // namespace

std::unique_ptr<DescriptorOutput> create_output(const std::string& path, std::size_t images,
                                                const std::vector<std::string>& names, const Session& session,
                                                bool overwrite) {
  const std::string extension = std::filesystem::path(path).extension().string();
  if (extension == ".csv") return std::make_unique<CsvOutput>(path, names, session, overwrite);
  if (extension == ".npy" || extension == ".h5" || extension == ".hdf5")
    return std::make_unique<ArrayOutput>(create_matrix(path, {images, names.size(), "/descriptors"}, overwrite));
  throw Error(ErrorCode::invalid_argument,
              fmt::format("{}: the extension tells the format; allowed are .npy .csv .h5 .hdf5", path), extension,
              ".npy .csv .h5 .hdf5");
}

}  // namespace tambour::tools::describe
