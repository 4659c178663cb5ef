add_executable(bands_bench bands_bench.cpp ../coordination/bands/milp.cpp)
target_link_libraries(bands_bench PRIVATE entrain_flags entrain_bands benchmark::benchmark)
