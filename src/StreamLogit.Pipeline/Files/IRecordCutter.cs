using StreamLogit.Engine.Records;

namespace StreamLogit.Pipeline.Files;

/// <summary>Cuts the bytes of a text file into records.</summary>
internal interface IRecordCutter
{
    /// <summary>Lines taken so far, of the header too.</summary>
    long Line { get; set; }

    /// <summary>Whether the bytes taken last end within a record, which is only so while one that is too long is passed over.</summary>
    bool IsWithinRecord { get; }

    /// <summary>Whether the header, without which no record can be cut, was not read yet.</summary>
    bool NeedsHeader { get; }

    /// <summary>Takes the header, if it is complete, off the front of the file.</summary>
    /// <returns>How many bytes were taken; 0 when more must be read first.</returns>
    /// <exception cref="InvalidRecordingException">It is no header.</exception>
    int CutHeader(ReadOnlySpan<byte> unread, bool atEnd);

    /// <summary>Cuts the next record off the front, if it is complete, and adds it to the batch.</summary>
    /// <param name="unread">The bytes that were not taken yet.</param>
    /// <param name="atEnd">Whether no more will follow them.</param>
    /// <param name="batch">Where the record goes.</param>
    /// <returns>How many bytes were taken, perhaps without giving a record; 0 when more must be read first.</returns>
    int Cut(ReadOnlySpan<byte> unread, bool atEnd, RecordBatch batch);
}
