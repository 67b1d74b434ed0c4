// bench/medians.hpp - runs all benchmarks interleaved, so that what disturbs one disturbs all, and keeps their medians.
#pragma once

#include <array>
#include <map>
#include <string>
#include <vector>

#include <benchmark/benchmark.h>

/// The table as ever, and the median time of each benchmark put aside, in the unit it was registered with.
class Medians : public benchmark::ConsoleReporter {
 public:
  Medians() : ConsoleReporter(OO_Tabular) {}

  /// Runs what is registered, `argv` overriding the defaults; false for an option that nobody knows.
  [[nodiscard]] bool run(int argc, char** argv) {
    std::vector<char*> arguments{argv[0]};
    std::array<std::string, 4> defaults{"--benchmark_repetitions=15", "--benchmark_enable_random_interleaving=true",
                                        "--benchmark_min_time=0.05", "--benchmark_report_aggregates_only=true"};
    for (std::string& option : defaults) {
      arguments.push_back(option.data());
    }
    arguments.insert(arguments.end(), argv + 1, argv + argc);
    int count = static_cast<int>(arguments.size());
    benchmark::Initialize(&count, arguments.data());
    if (benchmark::ReportUnrecognizedArguments(count, arguments.data())) {
      return false;
    }
    benchmark::RunSpecifiedBenchmarks(this);
    benchmark::Shutdown();
    return true;
  }

  void ReportRuns(std::vector<Run> const& runs) override {
    for (Run const& run : runs) {
      if (run.aggregate_name == "median") {
        medians_[run.run_name.function_name] = run.GetAdjustedCPUTime();
      }
    }
    ConsoleReporter::ReportRuns(runs);
  }

  /// 0 for one that did not run.
  [[nodiscard]] double of(std::string const& name) const {
    auto const at = medians_.find(name);
    return at == medians_.end() ? 0.0 : at->second;
  }
  [[nodiscard]] std::map<std::string, double> const& all() const { return medians_; }

 private:
  std::map<std::string, double> medians_;
};
