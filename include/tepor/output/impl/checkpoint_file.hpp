#pragma once
// Checkpoints to and from files.

#include <cstdio>
#include <tepor/base/error.hpp>
#include <tepor/output/checkpoint_file.hpp>
#include <vector>

namespace tepor {

TEPOR_INLINE Checkpoint load_checkpoint(const std::string& path) {
    std::FILE* file = std::fopen(path.c_str(), "rb");
    if (!file)
        throw Error(ErrorCode::bad_file, path,
                    "checkpoint: \"" + path + "\" cannot be opened; check the path and its permissions");
    std::vector<unsigned char> bytes;
    unsigned char piece[4096];
    std::size_t got = 0;
    while ((got = std::fread(piece, 1, sizeof piece, file)) > 0) bytes.insert(bytes.end(), piece, piece + got);
    std::fclose(file);
    return Checkpoint(std::move(bytes));
}

TEPOR_INLINE void save(const Checkpoint& checkpoint, const std::string& path) {
    const std::vector<unsigned char>& bytes = checkpoint.bytes();
    const std::string beside = path + ".new";
    std::FILE* file = std::fopen(beside.c_str(), "wb");
    bool fine = file != nullptr;
    if (fine) {
        fine = std::fwrite(bytes.data(), 1, bytes.size(), file) == bytes.size();
        fine = std::fclose(file) == 0 && fine;
    }
    if (fine && std::rename(beside.c_str(), path.c_str()) != 0) {
        std::remove(path.c_str()); // some systems do not rename onto an existing file
        fine = std::rename(beside.c_str(), path.c_str()) == 0;
    }
    if (!fine)
        throw Error(ErrorCode::bad_file, path,
                    "checkpoint: \"" + path +
                        "\" cannot be written; check the path, its permissions and the space left");
}

} // namespace tepor
