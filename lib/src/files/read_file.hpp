// Regular files, read at given places by any number of threads.
#pragma once

#include <cstddef>
#include <cstdint>
#include <memory>
#include <span>
#include <string>
#include <vector>

namespace tambour {

/// A file opened for reading. Its descriptor is kept while the process has few such files and is otherwise opened for
/// each use, so that a list of a hundred thousand files does not meet the limit on open files.
class ReadFile {
 public:
  class Descriptor {
   public:
    explicit Descriptor(int number) noexcept : number_(number) {}
    ~Descriptor();
    Descriptor(const Descriptor&) = delete;
    Descriptor& operator=(const Descriptor&) = delete;
    int number() const noexcept { return number_; }

   private:
    int number_;
  };

  /// Throws Error(bad_input): missing, a folder or a device, not readable.
  explicit ReadFile(std::string path);
  ~ReadFile();
  ReadFile(const ReadFile&) = delete;
  ReadFile& operator=(const ReadFile&) = delete;

  const std::string& path() const noexcept { return path_; }
  /// Length in bytes when it was opened.
  std::uint64_t size() const noexcept { return size_; }
  /// Whether the descriptor is kept between uses.
  bool kept() const noexcept { return kept_ != nullptr; }

  /// A descriptor for a series of reads.
  std::shared_ptr<const Descriptor> descriptor() const;
  /// Fills `out`. Throws Error(bad_input) when the file ends before.
  void read(const Descriptor& descriptor, std::uint64_t offset, std::span<std::byte> out) const;
  void read(std::uint64_t offset, std::span<std::byte> out) const { read(*descriptor(), offset, out); }
  /// At most `count` bytes from the beginning; fewer when the file is shorter.
  std::vector<std::byte> head(std::size_t count) const;

 private:
  std::string path_;
  std::uint64_t size_ = 0;
  std::shared_ptr<const Descriptor> kept_;
};

}  // namespace tambour
