#include "locate/run.hpp"

int main(int argc, char** argv) {
  return tambour::tools::guarded_main(argc, argv, "tambour-locate", tambour::tools::locate::run);
}
