using Microsoft.Data.Sqlite;

namespace StreamLogit.Pipeline;

/// <summary>Says in a sentence what is wrong with a disk.</summary>
internal static class StorageFault
{
    // errno ENOSPC and EDQUOT of Linux and macOS; ERROR_DISK_FULL and ERROR_HANDLE_DISK_FULL of Windows as HRESULTs.
    private const int NoSpace = 28;
    private const int QuotaLinux = 122;
    private const int QuotaMac = 69;
    private const int WindowsDiskFull = unchecked((int)0x80070070);
    private const int WindowsHandleDiskFull = unchecked((int)0x80070027);

    // Result codes of https://www.sqlite.org/rescode.html.
    private const int SqliteBusy = 5;
    private const int SqliteLocked = 6;
    private const int SqliteReadOnly = 8;
    private const int SqliteIoError = 10;
    private const int SqliteCorrupt = 11;
    private const int SqliteFull = 13;
    private const int SqliteCannotOpen = 14;
    private const int SqliteNotADatabase = 26;

    /// <summary>A file that cannot be written.</summary>
    public static PipelineException OfFile(string path, Exception cause) => IsFull(cause)
        ? Full(path, cause)
        : new PipelineException($"{path} cannot be written: {cause.Message}", cause);

    /// <summary>A database that cannot be used.</summary>
    public static PipelineException OfDatabase(string path, SqliteException cause) => cause.SqliteErrorCode switch
    {
        SqliteFull => Full(path, cause),
        SqliteCorrupt or SqliteNotADatabase => Damaged(path, "it is no sound SQLite database", cause),
        SqliteBusy or SqliteLocked => new PipelineException($"The state {path} is in use by another program.", cause),
        SqliteReadOnly or SqliteCannotOpen => new PipelineException($"The state {path} cannot be opened for writing.", cause),
        SqliteIoError => new PipelineException($"The disk failed while the state {path} was read or written: {cause.Message}", cause),
        _ => new PipelineException($"The state {path} cannot be used: {cause.Message}", cause),
    };

    /// <summary>A state that does not hold what it should.</summary>
    public static PipelineException Damaged(string path, string what, Exception? cause = null) => new(
        $"The state {path} is damaged: {what}. Restore it, with its score and reject files, from a copy, or begin with a new state folder.", cause);

    /// <summary>Whether a file operation failed for want of room.</summary>
    public static bool IsFull(Exception cause) => cause is IOException && cause.HResult is var code && (code is NoSpace or WindowsDiskFull or WindowsHandleDiskFull
        || (code == QuotaLinux && OperatingSystem.IsLinux()) || (code == QuotaMac && OperatingSystem.IsMacOS()));

    private static PipelineException Full(string path, Exception cause) => new(
        $"There is no room left on the disk for {path}. All up to the last commit is kept; with more room, the same command goes on from there.", cause);
}
