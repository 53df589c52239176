#include "spectrum/run.hpp"

int main(int argc, char** argv) {
  return tambour::tools::guarded_main(argc, argv, "tambour-spectrum", tambour::tools::spectrum::run);
}
