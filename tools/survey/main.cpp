#include "survey/run.hpp"

int main(int argc, char** argv) {
  return tambour::tools::guarded_main(argc, argv, "tambour-survey", tambour::tools::survey::run);
}
