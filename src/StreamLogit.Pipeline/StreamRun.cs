using System.Collections.Immutable;
using StreamLogit.Engine;
using StreamLogit.Engine.Health;
using StreamLogit.Engine.Learning;
using StreamLogit.Engine.Persistence;
using StreamLogit.Pipeline.Definition;
using StreamLogit.Pipeline.Options.Kafka;
using StreamLogit.Pipeline.State;
using StreamLogit.Pipeline.Transactions;

namespace StreamLogit.Pipeline;

/// <summary>A worker's run over its stream: it begins where the last one committed, or at the beginning.</summary>
public sealed class StreamRun : IDisposable
{
    // What makes a run go back again and again, without a single transaction in between, is not to be waited out.
    private const int MostVainRewinds = 10;
    private static readonly TimeSpan RewindPause = TimeSpan.FromMilliseconds(200);

    private readonly StreamDefinition _definition;
    private readonly StreamEnds _ends;
    private readonly LoopOptions _options;
    private readonly TimeProvider _time;
    private readonly StateStore? _state;
    private ScoringLoop _loop;
    private long _recordsBefore;

    /// <summary>Takes up the state, and brings engine, source and outputs to where it stands.</summary>
    /// <param name="definition">The stream.</param>
    /// <param name="ends">Where records come from and results go; the run disposes of them.</param>
    /// <param name="options">How records are moved.</param>
    /// <param name="time">The clock of commits, of waits and of health.</param>
    /// <exception cref="PipelineException">State, source and outputs do not fit together, or are out of reach.</exception>
    /// <exception cref="InvalidStateException">The state belongs to another definition.</exception>
    public StreamRun(StreamDefinition definition, StreamEnds ends, LoopOptions options, TimeProvider time)
    {
        (_definition, _ends, _time) = (definition, ends, time);
        try
        {
            if (definition.State is { } state)
            {
                options = options with { CommitEveryEvents = state.EveryEvents, CommitEveryTime = state.EveryTime };
                _state = StateStore.Open(state.Folder, definition.Engine.Stream, definition.EffectiveJson);
            }
            if (definition.Scores is TopicOutputOptions topic) options = options with { TransactionEveryEvents = topic.EveryEvents, TransactionEveryTime = topic.EveryTime };
            _options = options;
            (Engine, _loop) = TakeUp();
        }
        catch
        {
            Dispose();
            throw;
        }
    }

    /// <summary>The engine. It belongs to the loop while that runs; a run that goes back to its state takes a new one.</summary>
    public ScoringEngine Engine { get; private set; }

    /// <summary>Whether it goes on from an earlier run.</summary>
    public bool IsResumed { get; private set; }

    /// <summary>What became of the settings of the state that this run goes on from, or null where it begins.</summary>
    public BankChange? BankChange { get; private set; }

    /// <summary>Called within each commit of the loop, when all is written and nothing counts yet; tests die here.</summary>
    internal Action? BeforeCommit
    {
        init => _state?.BeforeCommit = value;
    }

    /// <summary>Called where the run goes back to its state, with the reason.</summary>
    public event Action<string>? Rewound;

    /// <summary>The latest health snapshot. Any thread may ask.</summary>
    public HealthSnapshot Health => Volatile.Read(ref _loop).Health;

    /// <summary>The largest coefficients found last, or null before or where none are looked for. Any thread may ask.</summary>
    public LargestCoefficients? Coefficients => Volatile.Read(ref _loop).Coefficients;

    /// <summary>Examples of the latest rejects of this run, a few for each reason. Any thread may ask.</summary>
    public ImmutableArray<RejectExample> RejectExamples => Volatile.Read(ref _loop).RejectExamples;

    /// <summary>For how long batches have been under way without one of them coming through; 0 where none is. Any thread may ask.</summary>
    public TimeSpan Standstill => _loop.Standstill;

    /// <summary>How far this run has come. Any thread may ask.</summary>
    public LoopProgress Progress
    {
        get
        {
            var progress = Volatile.Read(ref _loop).Progress;
            return progress with { Records = progress.Records + Interlocked.Read(ref _recordsBefore) };
        }
    }

    /// <summary>Runs until the source ends or the run is stopped; either way it ends with a commit.</summary>
    /// <exception cref="PipelineException">What surrounds the engine is broken. Nothing after the last commit counts.</exception>
    public async Task RunAsync(CancellationToken stop)
    {
        int vain = 0;
        while (true)
        {
            try
            {
                await _loop.RunAsync(stop).ConfigureAwait(false);
                return;
            }
            catch (RewindException e)
            {
                // Stopped, the run leaves what is in doubt to the next one.
                if (stop.IsCancellationRequested) return;
                vain = _loop.Progress.Transactions > 0 ? 0 : vain + 1;
                if (vain > MostVainRewinds) throw new PipelineException($"The run went back to its state {vain} times and could commit nothing. The last reason: {e.Message}", e);
                Rewound?.Invoke(e.Message);
                await Task.Delay(RewindPause * vain, _time, CancellationToken.None).ConfigureAwait(false);
            }
            Interlocked.Add(ref _recordsBefore, _loop.Progress.Records);
            _state?.Archive.Rewind();
            var (engine, loop) = TakeUp();
            Engine = engine;
            Volatile.Write(ref _loop, loop);
        }
    }

    /// <inheritdoc/>
    public void Dispose()
    {
        _ends.Dispose();
        _state?.Dispose();
    }

    private (ScoringEngine Engine, ScoringLoop Loop) TakeUp()
    {
        var engine = new ScoringEngine(_definition.Engine, _state?.Archive);
        Resume(engine);
        return (engine, new ScoringLoop(engine, _ends, _state, _options, _time));
    }

    private void Resume(ScoringEngine engine)
    {
        var checkpoint = _state?.Read();
        if (checkpoint is not null)
        {
            // Outputs are cut back last, when nothing else can go wrong any more.
            BankChange = engine.Load(checkpoint.Blocks);
            _ends.Source.Seek(checkpoint.Position);
            IsResumed = true;
        }
        if (_ends.Transaction is { } transaction) Recover(transaction);
        bool isKnown = true;
        foreach (var sink in _ends.Sinks)
        {
            long mark = 0;
            bool hasMark = checkpoint is not null && checkpoint.Marks.TryGetValue(sink.Name, out mark);
            sink.Start(hasMark ? mark : null);
            isKnown &= hasMark;
        }
        if (_state is null || isKnown && checkpoint is not null) return;

        // What a run writes and dies over before its next commit must be told from a file that was there before.
        var marks = _ends.Sinks.ToImmutableSortedDictionary(sink => sink.Name, sink => sink.Flush(), StringComparer.Ordinal);
        var blocks = new StateBlocks();
        engine.Save(blocks);
        _state.Commit(new Checkpoint(checkpoint?.Position ?? SourcePosition.Start, marks, blocks), keepsJournal: true);
    }

    private void Recover(IStreamTransaction transaction)
    {
        transaction.Recover();
        var journal = _state?.ReadJournal() ?? [];
        // Of the last transaction a run that died, or lost the log from sight, does not know.
        if (journal is [.., var last] && !transaction.IsCommitted(last.Spans)) journal = journal[..^1];
        _state?.KeepJournal(journal.Length);
        transaction.Repeat(journal);
    }
}
