#include "cli.h"

#include <errno.h>
#include <stdio.h>
#include <stdlib.h>
#include <string.h>
#include <sys/stat.h>
#include <unistd.h>

static enum cli_exit out_of_memory(void) {
    fputs("beamward: out of memory\n", stderr);
    return CLI_SYSTEM_FAILED;
}

enum cli_exit cli_print(struct bw_text *text) {
    enum cli_exit exit_code = text->failed ? out_of_memory() : CLI_DONE;
    if (exit_code == CLI_DONE && text->length > 0 && fwrite(text->data, 1, text->length, stdout) != text->length)
        exit_code = CLI_SYSTEM_FAILED; /* main says so */
    bw_text_free(text);
    return exit_code;
}

enum cli_exit cli_print_unless_quiet(const struct cli_arguments *arguments, struct bw_text *text) {
    if (!cli_value(arguments, "--quiet"))
        return cli_print(text);
    bw_text_free(text);
    return CLI_DONE;
}

static enum cli_exit write_failed(const char *path) {
    fprintf(stderr, "beamward: %s: %s\n", path, strerror(errno));
    return CLI_SYSTEM_FAILED;
}

static char *join(const char *directory, const char *name, const char *ending) {
    size_t size = strlen(directory) + strlen(name) + strlen(ending) + 2;
    char *path = malloc(size);
    if (path)
        snprintf(path, size, "%s%s%s%s", directory, directory[0] ? "/" : "", name, ending);
    return path;
}

static bool write_whole(const char *path, const struct bw_text *text) {
    FILE *file = fopen(path, "wb");
    if (!file)
        return false;
    bool written = text->length == 0 || fwrite(text->data, 1, text->length, file) == text->length;
    written = fflush(file) == 0 && fsync(fileno(file)) == 0 && written;
    return fclose(file) == 0 && written;
}

enum cli_exit cli_files_add(struct cli_files *files, const char *directory, const char *name, struct bw_text *text) {
    char ending[BW_NAME_SIZE];
    snprintf(ending, sizeof ending, ".%ld.part", (long)getpid());
    char *path = join(directory, name, ""), *beside = join(directory, name, ending);
    enum cli_exit exit_code = CLI_DONE;
    if (!path || !beside || text->failed || files->count == CLI_FILES_MAX) {
        free(path);
        free(beside);
        exit_code = out_of_memory();
    } else {
        files->paths[files->count] = path;
        files->beside[files->count++] = beside;
        if (!write_whole(beside, text))
            exit_code = write_failed(path);
    }
    bw_text_free(text);
    if (exit_code != CLI_DONE)
        cli_files_discard(files);
    return exit_code;
}

enum cli_exit cli_files_rename(struct cli_files *files) {
    enum cli_exit exit_code = CLI_DONE;
    for (size_t i = 0; i < files->count && exit_code == CLI_DONE; i++)
        if (rename(files->beside[i], files->paths[i]) != 0)
            exit_code = write_failed(files->paths[i]);
    cli_files_discard(files);
    return exit_code;
}

void cli_files_discard(struct cli_files *files) {
    for (size_t i = 0; i < files->count; i++) {
        unlink(files->beside[i]); /* gone already if it was renamed */
        free(files->beside[i]);
        free(files->paths[i]);
    }
    files->count = 0;
}

enum cli_exit cli_make_directory(const char *path) {
    char *part = bw_duplicate(path);
    if (!part)
        return out_of_memory();
    enum cli_exit exit_code = CLI_DONE;
    for (char *end = part + 1; exit_code == CLI_DONE; end++) {
        if (*end != '/' && *end != '\0')
            continue;
        char kept = *end;
        *end = '\0';
        if (mkdir(part, 0777) != 0 && errno != EEXIST)
            exit_code = write_failed(part);
        *end = kept;
        if (kept == '\0')
            break;
    }
    struct stat status;
    if (exit_code == CLI_DONE && (stat(path, &status) != 0 || !S_ISDIR(status.st_mode))) {
        fprintf(stderr, "beamward: %s: is not a folder; --out names the folder for the record\n", path);
        exit_code = CLI_WRONG_INPUT;
    }
    free(part);
    return exit_code;
}
