# The two parts of OpenCV that are used, core and imgcodecs, without its package configuration, which Debian ships
# only together with every other module. Target: OpenCVCodecs::OpenCVCodecs.
find_path(OpenCVCodecs_INCLUDE_DIR opencv2/imgcodecs.hpp PATH_SUFFIXES opencv4)
find_library(OpenCVCodecs_CORE opencv_core)
find_library(OpenCVCodecs_IMGCODECS opencv_imgcodecs)
include(FindPackageHandleStandardArgs)
find_package_handle_standard_args(OpenCVCodecs REQUIRED_VARS OpenCVCodecs_INCLUDE_DIR OpenCVCodecs_CORE
                                                             OpenCVCodecs_IMGCODECS)
if(OpenCVCodecs_FOUND AND NOT TARGET OpenCVCodecs::OpenCVCodecs)
  add_library(OpenCVCodecs::OpenCVCodecs INTERFACE IMPORTED)
  target_include_directories(OpenCVCodecs::OpenCVCodecs INTERFACE ${OpenCVCodecs_INCLUDE_DIR})
  target_link_libraries(OpenCVCodecs::OpenCVCodecs INTERFACE ${OpenCVCodecs_IMGCODECS} ${OpenCVCodecs_CORE})
endif()
