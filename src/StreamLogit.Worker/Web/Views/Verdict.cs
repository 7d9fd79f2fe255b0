using StreamLogit.Engine.Health;

namespace StreamLogit.Worker.Web.Views;

/// <summary>What the page says first: whether the published probabilities hold, in words with their numbers.</summary>
/// <param name="Standing">How they stand.</param>
/// <param name="Title">The answer.</param>
/// <param name="Sentence">Its numbers.</param>
internal sealed record Verdict(Standing Standing, string Title, string Sentence)
{
    /// <summary>What chance has to do with it, or null where that needs no words.</summary>
    public string? Note { get; private init; }

    // From a standard deviation of about two outcomes on, the ranges of the normal distribution mean something.
    private const double EnoughVariance = 5;
    private const double EnoughSurplus = 10;
    private const double EnoughBad = 10;

    public static Verdict Of(HealthFigures figures, string window, long awaiting)
    {
        if (figures.Count == 0)
        {
            string waiting = awaiting > 0 ? $" {Wording.Of(awaiting, "event waits", "events wait")} for theirs." : "";
            return new Verdict(Standing.Unknown, "Nothing to tell yet", $"no label came {window}.{waiting}");
        }
        // Alerts are what people act on; all labels also count the bad outcomes that no alert warned of.
        Candidate all = new(Wording.Of(figures.Count, "label", "labels"), figures.Promised), alerts = new(
            Wording.Of(figures.Alerts.Count, "alert", "alerts"), figures.Alerts.Promised);
        var shown = all.Standing > alerts.Standing || alerts.Standing == Standing.Unknown ? all : alerts;
        if (IsHarmful(figures) && shown.Standing < Standing.Broken)
        {
            return new Verdict(
                Standing.Broken, "The scores do harm",
                $"of {Wording.Of(figures.Count, "label", "labels")} {window} their log-loss is {Wording.Figure(figures.LogLoss)}, that of the mere base rate {Wording.Figure(figures.BaseRateLogLoss)}.");
        }
        return new Verdict(shown.Standing, shown.Title, shown.Sentence(window)) { Note = shown.Note };
    }

    /// <summary>Whether even the lower end of the log-loss's 95 % interval is above the base rate's. Without some bad outcomes that interval says nothing.</summary>
    private static bool IsHarmful(HealthFigures figures) =>
        figures.Promised.Came >= EnoughBad && figures.LogLossInterval.Low > figures.BaseRateLogLoss;

    private readonly record struct Candidate(string Subject, PromisedPositives Promised)
    {
        public Standing Standing
        {
            get
            {
                if (Promised.Variance < EnoughVariance && Math.Abs(Promised.Came - Promised.Expected) < EnoughSurplus) return Standing.Unknown;
                if (Promised.Range80.Contains(Promised.Came)) return Standing.Holds;
                return Promised.Range95.Contains(Promised.Came) ? Standing.Doubtful : Standing.Broken;
            }
        }

        public string Title => Standing switch
        {
            Standing.Unknown => "Too few to tell",
            Standing.Holds => "Probabilities hold",
            Standing.Doubtful => "Probabilities may be off",
            _ => Promised.Came > Promised.Expected ? "Probabilities promise too little" : "Probabilities promise too much",
        };

        public string? Note => Standing switch
        {
            Standing.Doubtful => "Chance alone leaves the 80 % range once in five times.",
            Standing.Broken => "Chance alone strays so far less than once in twenty times.",
            _ => null,
        };

        public string Sentence(string window) =>
            $"of {Subject} {window} promised {Wording.Amount(Promised.Expected)} bad, {Wording.Amount(Promised.Came)} came (80 % range {Wording.Range(Promised.Range80)}).";
    }
}
