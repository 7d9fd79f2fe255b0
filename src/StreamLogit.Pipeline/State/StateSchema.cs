using Microsoft.Data.Sqlite;

namespace StreamLogit.Pipeline.State;

/// <summary>The layout of a state.</summary>
internal static class StateSchema
{
    // "SLgt", so that the program file(1) and a stray open tell a state from another SQLite database.
    private const int ApplicationId = 0x534c6774;
    private const int FormatVersion = 1;

    // The merged order of the records since the last commit, a row for each transaction of the outputs.
    private const string Journal = "journal(number INTEGER PRIMARY KEY, hash INTEGER NOT NULL, bytes BLOB NOT NULL)";

    /// <summary>Checks that an open database is a state, or makes one of an empty database.</summary>
    public static void Prepare(SqliteConnection connection, string path, SqliteOpenMode mode)
    {
        using var command = connection.CreateCommand();
        int applicationId = (int)Pragma("application_id");
        int version = (int)Pragma("user_version");
        bool isNew = applicationId == 0 && version == 0 && Pragma("schema_version") == 0;
        if (!isNew && applicationId != ApplicationId)
            throw StorageFault.Damaged(path, "it is a database of another program");
        if (version > FormatVersion)
            throw new PipelineException($"The state {path} was written by a later version of this program (format {version}; this one reads up to {FormatVersion}).");
        if (mode == SqliteOpenMode.ReadOnly)
        {
            if (isNew) throw new PipelineException($"The state {path} is empty.");
            return;
        }

        // FULL has a commit on the disk before it counts; in WAL mode that is one fsync a commit.
        if (isNew)
        {
            // Only before the first table can the file be told to give room back later.
            command.CommandText = "PRAGMA auto_vacuum = INCREMENTAL";
            command.ExecuteNonQuery();
        }
        command.CommandText = "PRAGMA journal_mode = WAL; PRAGMA synchronous = FULL; PRAGMA journal_size_limit = 67108864;";
        command.ExecuteNonQuery();
        if (!isNew)
        {
            // States of earlier versions have none.
            command.CommandText = $"CREATE TABLE IF NOT EXISTS {Journal}";
            command.ExecuteNonQuery();
            return;
        }
        command.CommandText = $"""
            BEGIN IMMEDIATE;
            CREATE TABLE meta(key TEXT PRIMARY KEY, value TEXT NOT NULL) WITHOUT ROWID;
            CREATE TABLE positions(place INTEGER PRIMARY KEY, origin TEXT NOT NULL, offset INTEGER NOT NULL,
                number INTEGER NOT NULL, fingerprint INTEGER NOT NULL);
            CREATE TABLE outputs(name TEXT PRIMARY KEY, mark INTEGER NOT NULL) WITHOUT ROWID;
            CREATE TABLE blocks(part TEXT NOT NULL, number INTEGER NOT NULL, hash INTEGER NOT NULL, bytes BLOB NOT NULL,
                PRIMARY KEY(part, number));
            CREATE TABLE small_blocks(number INTEGER PRIMARY KEY, hash INTEGER NOT NULL, bytes BLOB NOT NULL);
            CREATE TABLE {Journal};
            PRAGMA application_id = {ApplicationId};
            PRAGMA user_version = {FormatVersion};
            COMMIT;
            """;
        command.ExecuteNonQuery();

        long Pragma(string name)
        {
            command.CommandText = $"PRAGMA {name}";
            return (long)(command.ExecuteScalar() ?? 0L);
        }
    }
}
