using StreamLogit.Engine.Records;
using StreamLogit.Pipeline.Options;

namespace StreamLogit.Pipeline.Files;

/// <summary>The records of several recordings, one after the other. A batch never holds records of two.</summary>
public sealed class RecordingSequence : IRecordSource
{
    private readonly IReadOnlyList<FileSourceOptions> _recordings;
    private readonly int _maximumBytes;
    private readonly TimeProvider _time;
    private readonly List<OriginPosition> _finished = [];
    private readonly long? _totalBytes;

    private IRecordSource _current;
    private long _finishedBytes;

    /// <summary>Opens the first of at least one recordings.</summary>
    /// <exception cref="InvalidRecordingException">One of them is not there.</exception>
    public RecordingSequence(IReadOnlyList<FileSourceOptions> recordings, int maximumBytes, TimeProvider time)
    {
        _recordings = recordings;
        _maximumBytes = maximumBytes;
        _time = time;
        long total = 0;
        bool isKnown = true;
        foreach (var recording in recordings)
        {
            // Better to miss the last recording now than after hours with those before it. Standard input is left alone: it comes once.
            if (recording.Path == RecordingFile.StandardInput)
            {
                isKnown = false;
                continue;
            }
            var file = new FileInfo(recording.Path);
            if (!file.Exists) throw new InvalidRecordingException($"The recording {recording.Path} does not exist.");
            total += file.Length;
        }
        _totalBytes = isKnown ? total : null;
        _current = Open(0);
    }

    /// <inheritdoc/>
    public SourcePosition Position => new([.. _finished, .. _current.Position.Origins]);

    /// <inheritdoc/>
    public SourceProgress Progress => new(Volatile.Read(ref _finishedBytes) + Volatile.Read(ref _current).Progress.Bytes, _totalBytes);

    /// <inheritdoc/>
    public void Seek(SourcePosition position)
    {
        if (position.Origins.Length > _recordings.Count)
            throw new PipelineException(
                $"{position.Origins.Length} recordings were begun before, and only {_recordings.Count} are given now. Give all of them, in their order.");
        for (int i = 0; i < position.Origins.Length - 1; i++)
        {
            string name = Path.GetFileName(_recordings[i].Path);
            if (position.Origins[i].Origin != name)
                throw new PipelineException(
                    $"{name} stands where {position.Origins[i].Origin} was read before. New recordings must come behind those that were read.");
            Next(position.Origins[i]);
        }
        if (position.Origins is [.., var last]) _current.Seek(new SourcePosition([last]));
    }

    /// <inheritdoc/>
    public async ValueTask<FillOutcome> FillAsync(RecordBatch batch, int maximumRecords, CancellationToken cancellation)
    {
        while (true)
        {
            var outcome = await _current.FillAsync(batch, maximumRecords, cancellation).ConfigureAwait(false);
            if (outcome != FillOutcome.Ended || _finished.Count + 1 == _recordings.Count) return outcome;
            Next(_current.Position.Origins is [var position] ? position : new OriginPosition(batch.Origin, 0, 0, 0));
        }
    }

    /// <inheritdoc/>
    public void Dispose() => _current.Dispose();

    private void Next(OriginPosition finished)
    {
        _finished.Add(finished);
        Volatile.Write(ref _finishedBytes, _finishedBytes + (_current.Progress.TotalBytes ?? _current.Progress.Bytes));
        _current.Dispose();
        Volatile.Write(ref _current, Open(_finished.Count));
    }

    private IRecordSource Open(int index)
    {
        // Only the last recording can still be growing.
        var recording = _recordings[index] with { Follow = _recordings[index].Follow && index == _recordings.Count - 1 };
        return RecordingSource.Open(recording, _maximumBytes, _time);
    }
}
