using System.Globalization;
using StreamLogit.Engine.Fitting;
using StreamLogit.Pipeline.Fits;

namespace StreamLogit.Worker.Output;

/// <summary>Writes fitted coefficients.</summary>
internal static class FitTables
{
    /// <summary>Writes a table of the coefficients and one of the fit.</summary>
    public static void Write(FitResult fit, Terminal terminal)
    {
        if (fit.Coefficients.Length > 0)
        {
            Coefficients(fit).Write(terminal);
            terminal.Writer.WriteLine();
        }
        var table = new ResultTable("fit", "value");
        table.Add("method", MethodName(fit.Method));
        table.Add("outcome", OutcomeName(fit.Outcome));
        table.Add("labelled events", FigureText.Count(fit.Rows));
        table.Add("their weight", fit.Weight.ToString("G10", CultureInfo.InvariantCulture));
        table.Add("deviance", Figure(fit.Deviance));
        table.Add("deviance of the base rate", Figure(fit.NullDeviance));
        table.Add("log-loss", FigureText.Mean(fit.Deviance / 2 / fit.Weight));
        table.Write(terminal);
    }

    /// <summary>Writes everything as JSON to standard output.</summary>
    public static void WriteJson(FitResult fit) => JsonOutput.Write(json =>
    {
        json.WriteStartObject();
        json.WriteString("method", MethodName(fit.Method));
        json.WriteString("outcome", OutcomeName(fit.Outcome));
        json.WriteNumber("labelled", fit.Rows);
        json.WriteNumber("weight", fit.Weight);
        json.WriteFigure("deviance", fit.Deviance);
        json.WriteFigure("baseRateDeviance", fit.NullDeviance);
        json.WriteFigure("logLoss", fit.Deviance / 2 / fit.Weight);
        json.WriteStartArray("findings");
        foreach (string finding in fit.Findings) json.WriteStringValue(finding);
        json.WriteEndArray();
        json.WriteStartArray("coefficients");
        foreach (var coefficient in fit.Coefficients)
        {
            json.WriteStartObject();
            json.WriteString("feature", coefficient.Name);
            json.WriteFigure("estimate", coefficient.Estimate);
            json.WriteFigure("standardError", coefficient.StandardError);
            json.WriteFigure("z", coefficient.Z);
            json.WriteFigure("p", coefficient.P);
            json.WriteEndObject();
        }
        json.WriteEndArray();
        json.WriteEndObject();
    });

    private static ResultTable Coefficients(FitResult fit)
    {
        bool hasTests = fit.Method == FitMethod.MaximumLikelihood;
        var table = hasTests
            ? new ResultTable("feature", "estimate", "standard error", "z", "p")
            : new ResultTable("feature", "estimate", "standard error (posterior)");
        foreach (var c in fit.Coefficients)
        {
            if (hasTests) table.Add(c.Name, Figure(c.Estimate), Figure(c.StandardError), Decimals(c.Z), PValue(c.P));
            else table.Add(c.Name, Figure(c.Estimate), Figure(c.StandardError));
        }
        return table;
    }

    private static string MethodName(FitMethod method) => method == FitMethod.MaximumLikelihood ? "maximum likelihood" : "L2 penalty";

    private static string OutcomeName(FitOutcome outcome) => outcome switch
    {
        FitOutcome.Converged => "converged",
        FitOutcome.OneClass => "one class",
        FitOutcome.PerfectSeparation => "perfect separation",
        FitOutcome.QuasiSeparation => "quasi-separation",
        _ => "not converged",
    };

    private static string Figure(double value) => double.IsFinite(value) ? value.ToString("G7", CultureInfo.InvariantCulture) : "-";

    private static string Decimals(double value) => double.IsFinite(value) ? value.ToString("F3", CultureInfo.InvariantCulture) : "-";

    private static string PValue(double value) => double.IsFinite(value) ? value.ToString("G3", CultureInfo.InvariantCulture) : "-";
}
