namespace FieldSolve.Pictures;

/// <summary>A picture to be drawn.</summary>
/// <param name="Kind">See <see cref="PictureFile"/>.</param>
/// <param name="Wiring">Name of the wiring it shows; null when it shows all.</param>
/// <param name="Name">File name without extension.</param>
/// <param name="Caption">What is seen.</param>
/// <param name="Draw">Draws it; null when there is nothing to show.</param>
internal sealed record PicturePlan(string Kind, string? Wiring, string Name, string Caption, Func<Figure?> Draw);

/// <summary>Draws pictures side by side and writes each as PNG and SVG.</summary>
internal static class PictureBatch
{
    /// <summary>Draws all.</summary>
    /// <returns>The pictures that had something to show, in the order of the plans.</returns>
    /// <exception cref="OperationCanceledException">The run was cancelled; pictures already written stay.</exception>
    public static IReadOnlyList<PictureFile> Write(IReadOnlyList<PicturePlan> plans, string folder, CancellationToken cancel)
    {
        EmbeddedFont.Use();
        PictureFile?[] files = new PictureFile?[plans.Count];
        try
        {
            Parallel.For(0, plans.Count, new ParallelOptions { CancellationToken = cancel }, k =>
            {
                PicturePlan plan = plans[k];
                using Figure? figure = plan.Draw();
                if (figure is not null)
                {
                    PictureFile file = new(
                        plan.Kind, plan.Wiring, plan.Caption,
                        Path.Combine(folder, plan.Name + ".png"), Path.Combine(folder, plan.Name + ".svg"), figure.Width, figure.Height);
                    figure.Save(file.PngPath, file.SvgPath);
                    files[k] = file;
                }
            });
        }
        catch (AggregateException e) when (e.InnerExceptions.Count > 0)
        {
            System.Runtime.ExceptionServices.ExceptionDispatchInfo.Throw(e.InnerExceptions[0]);
        }

        return [.. files.OfType<PictureFile>()];
    }
}
