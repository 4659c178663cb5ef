add_executable(offsets_bench offsets_bench.cpp offset_generators.cpp)
target_link_libraries(offsets_bench PRIVATE entrain_flags entrain_offsets fmt::fmt)
