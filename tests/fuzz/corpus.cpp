// Runs a fuzz target over files, without a fuzzer: each file named, and each file in each folder named.
#include <cstdint>
#include <cstdio>
#include <filesystem>
#include <fstream>
#include <iterator>
#include <vector>

#include "target.hpp"

namespace {

int run(std::filesystem::path const& file) {
  std::ifstream in(file, std::ios::binary);
  std::vector<char> const bytes{std::istreambuf_iterator<char>(in), {}};
  if (!in) {
    std::fprintf(stderr, "corpus: cannot read %s\n", file.string().c_str());
    std::exit(2);
  }
  std::vector<std::uint8_t> const data(bytes.begin(), bytes.end());
  LLVMFuzzerTestOneInput(data.data(), data.size());
  return 1;
}

}  // namespace

int main(int argc, char** argv) {
  int inputs = 0;
  for (int i = 1; i < argc; ++i) {
    if (std::filesystem::is_directory(argv[i])) {
      for (auto const& entry : std::filesystem::directory_iterator(argv[i])) {
        inputs += run(entry.path());
      }
    } else {
      inputs += run(argv[i]);
    }
  }
  std::printf("corpus: %d inputs held\n", inputs);
  return inputs == 0 ? 1 : 0;
}
