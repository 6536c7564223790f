#pragma once
// Google Benchmark's runs as a table: topics, entries in rows, sizes in columns, least and median processor time, and how
// many times faster than the best peer the library is.

#include <algorithm>
#include <benchmark/benchmark.h>
#include <cstdio>
#include <functional>
#include <map>
#include <string>
#include <utility>
#include <vector>

namespace ratios {

/// Who ran: the library, somebody it is compared with, or a yardstick that only stands beside them.
enum class Side { ours, peer, beside };

struct Entry {
    std::string topic, what;
    long size = 0;
    Side side = Side::beside;
    std::vector<double> milliseconds;
};

/// Collects the repetitions of every entry, prints nothing while they run.
class Table final : public benchmark::BenchmarkReporter {
  public:
    /// Registers `work` to be timed `repetitions` times, once each.
    void add(const std::string& topic, long size, const std::string& what, Side side, int repetitions,
             std::function<void()> work) {
        const std::string name = topic + " | " + what + " | " + std::to_string(size);
        position_[name] = entries_.size();
        entries_.push_back({topic, what, size, side, {}});
        benchmark::RegisterBenchmark(name.c_str(),
                                     [work = std::move(work)](benchmark::State& state) {
                                         for (auto step : state) {
                                             (void)step;
                                             work();
                                         }
                                     })
            ->Iterations(1)
            ->Repetitions(repetitions)
            ->MeasureProcessCPUTime()
            ->Unit(benchmark::kMillisecond);
    }
    /// How many times faster than the best peer a topic is asked to be, at one size or (0) at all the others.
    void ask(const std::string& topic, double factor, long size = 0) { asked_[{topic, size}] = factor; }
    /// A figure that is no time; stands in the table and in the CSV as it is.
    void note(const std::string& topic, long size, const std::string& what, double value) {
        notes_.push_back({topic, what, size, Side::beside, {value}});
    }

    bool ReportContext(const Context&) override { return true; }
    void ReportRuns(const std::vector<Run>& runs) override {
        for (const Run& run : runs) {
            if (run.run_type != Run::RT_Iteration || run.error_occurred) continue;
            const auto found = position_.find(run.run_name.function_name);
            if (found == position_.end()) continue;
            entries_[found->second].milliseconds.push_back(run.GetAdjustedCPUTime());
            std::fprintf(stderr, ".");
        }
    }
    void Finalize() override { std::fprintf(stderr, "\n"); }

    void print() const {
        for (const std::string& topic : topics()) print_topic(topic);
        for (const Entry& e : notes_)
            std::printf("%s, %s%s: %.1f\n", e.topic.c_str(), e.what.c_str(),
                        e.size > 0 ? (", " + std::to_string(e.size) + " unknowns").c_str() : "", e.milliseconds[0]);
    }

    [[nodiscard]] bool write(const char* path) const {
        std::FILE* file = std::fopen(path, "w");
        if (!file) return false;
        std::fprintf(file, "topic,entry,unknowns,least_ms,median_ms,times_faster_than_best_peer,asked\n");
        for (const Entry& e : entries_) {
            if (e.milliseconds.empty()) continue;
            std::fprintf(file, "\"%s\",\"%s\",%ld,%.4f,%.4f,", e.topic.c_str(), e.what.c_str(), e.size, least(e),
                         median(e));
            const double factor = e.side == Side::ours ? times_faster(e) : 0.0;
            if (factor > 0.0) std::fprintf(file, "%.2f", factor);
            std::fprintf(file, ",");
            if (factor > 0.0 && asked(e.topic, e.size) > 0.0) std::fprintf(file, "%.2f", asked(e.topic, e.size));
            std::fprintf(file, "\n");
        }
        for (const Entry& e : notes_)
            std::fprintf(file, "\"%s\",\"%s\",%ld,%.4f,,,\n", e.topic.c_str(), e.what.c_str(), e.size,
                         e.milliseconds[0]);
        return std::fclose(file) == 0;
    }

    [[nodiscard]] const std::vector<Entry>& entries() const { return entries_; }
    [[nodiscard]] static double least(const Entry& e) {
        return *std::min_element(e.milliseconds.begin(), e.milliseconds.end());
    }

  private:
    [[nodiscard]] static double median(const Entry& e) {
        std::vector<double> sorted = e.milliseconds;
        std::sort(sorted.begin(), sorted.end());
        const std::size_t n = sorted.size();
        return 0.5 * (sorted[n / 2] + sorted[(n - 1) / 2]);
    }
    /// Best peer over this entry, by least times; 0 without a peer.
    [[nodiscard]] double times_faster(const Entry& ours) const {
        double best = 0.0;
        for (const Entry& e : entries_) {
            if (e.topic != ours.topic || e.size != ours.size || e.side != Side::peer || e.milliseconds.empty())
                continue;
            best = best > 0.0 ? std::min(best, least(e)) : least(e);
        }
        return best / least(ours);
    }
    [[nodiscard]] double asked(const std::string& topic, long size) const {
        const auto found = asked_.find({topic, size});
        if (found != asked_.end()) return found->second;
        return size == 0 ? 0.0 : asked(topic, 0);
    }
    [[nodiscard]] std::vector<std::string> topics() const {
        std::vector<std::string> out;
        for (const Entry& e : entries_)
            if (std::find(out.begin(), out.end(), e.topic) == out.end()) out.push_back(e.topic);
        return out;
    }
    void print_topic(const std::string& topic) const {
        std::vector<long> sizes;
        std::vector<std::string> rows;
        for (const Entry& e : entries_) {
            if (e.topic != topic || e.milliseconds.empty()) continue;
            if (std::find(sizes.begin(), sizes.end(), e.size) == sizes.end()) sizes.push_back(e.size);
            if (std::find(rows.begin(), rows.end(), e.what) == rows.end()) rows.push_back(e.what);
        }
        if (rows.empty()) return;
        std::printf("\n%-46s", topic.c_str());
        for (const long size : sizes) std::printf("%22ld", size);
        std::printf("\n%-46s", "  milliseconds, least (median)");
        std::printf("\n");
        for (const std::string& row : rows) {
            std::printf("  %-44s", row.c_str());
            for (const long size : sizes) print_cell(topic, row, size);
            std::printf("\n");
        }
        for (const std::string& row : rows) {
            bool any = false;
            for (const Entry& e : entries_)
                any = any || (e.topic == topic && e.what == row && e.side == Side::ours && !e.milliseconds.empty() &&
                              times_faster(e) > 0.0);
            if (!any) continue;
            std::printf("  %-44s", ("best peer / " + row).c_str());
            for (const long size : sizes) {
                double factor = 0.0;
                for (const Entry& e : entries_)
                    if (e.topic == topic && e.what == row && e.size == size && !e.milliseconds.empty())
                        factor = times_faster(e);
                std::printf("%22.2f", factor);
            }
            double last = 0.0;
            for (const long size : sizes) {
                if (asked(topic, size) > 0.0 && asked(topic, size) != last)
                    std::printf(last > 0.0 ? ", %.2f" : "   (to reach: %.2f", asked(topic, size));
                last = asked(topic, size);
            }
            std::printf(last > 0.0 ? ")\n" : "\n");
        }
    }
    void print_cell(const std::string& topic, const std::string& row, long size) const {
        for (const Entry& e : entries_) {
            if (e.topic != topic || e.what != row || e.size != size || e.milliseconds.empty()) continue;
            std::printf("%12.3f (%7.3f)", least(e), median(e));
            return;
        }
        std::printf("%22s", "-");
    }

    std::vector<Entry> entries_, notes_;
    std::map<std::string, std::size_t> position_;
    std::map<std::pair<std::string, long>, double> asked_;
};

} // namespace ratios
