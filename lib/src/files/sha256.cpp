#include <openssl/evp.h>

#include <algorithm>
#include <memory>

#include "files/read_file.hpp"
#include "files/refuse.hpp"
#include "tambour/provenance.hpp"

namespace tambour {

std::string sha256_of_file(const std::string& path) {
  constexpr std::uint64_t piece_bytes = 1 << 20;
  const ReadFile file(path);
  const auto descriptor = file.descriptor();
  const std::unique_ptr<EVP_MD_CTX, decltype(&EVP_MD_CTX_free)> context(EVP_MD_CTX_new(), &EVP_MD_CTX_free);
  bool fine = context && EVP_DigestInit_ex(context.get(), EVP_sha256(), nullptr) == 1;
  std::vector<std::byte> piece(static_cast<std::size_t>(std::min(piece_bytes, file.size())));
  for (std::uint64_t offset = 0; offset < file.size(); offset += piece.size()) {
    piece.resize(static_cast<std::size_t>(std::min(piece_bytes, file.size() - offset)));
    file.read(*descriptor, offset, piece);
    fine = fine && EVP_DigestUpdate(context.get(), piece.data(), piece.size()) == 1;
  }
  unsigned char digest[EVP_MAX_MD_SIZE];
  unsigned length = 0;
  fine = fine && EVP_DigestFinal_ex(context.get(), digest, &length) == 1;
  if (!fine) throw Error(ErrorCode::internal, path + ": SHA-256 failed in the cryptographic library");
  std::string text;
  for (unsigned i = 0; i < length; ++i) text += fmt::format("{:02x}", digest[i]);
  return text;
}

}  // namespace tambour
